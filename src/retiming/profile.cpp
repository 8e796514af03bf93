#include "pathvet/retiming/profile.hpp"

#include <algorithm>
#include <cmath>
#include <limits>

#include "pathvet/retiming/time_optimal.hpp"

namespace pathvet {
namespace {

/// A segment's grid has at least so many intervals, fine enough for the ends of its ramps; fewer on paths of
/// many segments.
constexpr double most_least_intervals = 500;
constexpr double fewest_least_intervals = 40;
constexpr double least_of_path = 50000;  // shared out over the segments

double least_intervals(std::size_t segments) {
  return std::clamp(least_of_path / static_cast<double>(segments), fewest_least_intervals,
                    most_least_intervals);
}
/// Joint rates whose directions differ by less than this (of unit vectors, in shares of the limits) go on
/// unbroken.
constexpr double same_direction = 1e-6;

/// One segment after the other that the arm runs through without a stop.
class Run {
 public:
  Run(const std::vector<RateLimit>& limits, const ProfileOptions& options, double least)
      : limits_(limits), options_(options), least_intervals_(least) {
    grid_.axes = limits.size();
    for (const RateLimit& limit : limits) {
      constexpr double none = std::numeric_limits<double>::infinity();
      grid_.speed.push_back(limit.speed.value_or(none));
      grid_.acceleration.push_back(limit.acceleration.value_or(none));
    }
  }

  /// `scale`: of the chain's parameter per unit of the segment's fraction.
  void add(const RecordedSegment& segment, double scale);
  [[nodiscard]] bool empty() const { return points_.empty(); }
  /// Appends the points and sets the durations of its segments.
  void solve(bool rest_at_begin, bool rest_at_end, double begin_time, Profile& out) const;
  [[nodiscard]] double duration() const { return duration_; }

 private:
  struct Point {
    const RecordedSegment* segment;
    CurveNode node;
    double scale;
  };

  void add_point(const RecordedSegment& segment, const CurveNode& node, double scale);

  const std::vector<RateLimit>& limits_;
  ProfileOptions options_;
  double least_intervals_;
  SpeedGrid grid_;
  std::vector<Point> points_;
  double begin_ = 0;  // of the parameter, at the current segment's begin
  mutable double duration_ = 0;
};

void Run::add_point(const RecordedSegment& segment, const CurveNode& node, double scale) {
  grid_.parameter.push_back(begin_ + scale * node.fraction);
  std::size_t external = 0;
  for (const RateLimit& limit : limits_) {
    const bool arm = !limit.terms.empty();
    grid_.first.push_back((arm ? limit.of(node.first) : segment.external[external++]) / scale);
    grid_.second.push_back((arm ? limit.of(node.second) : 0.0) / (scale * scale));
  }
  grid_.ceiling.push_back(options_.faster ? std::numeric_limits<double>::infinity()
                                          : scale / segment.duration);
  points_.push_back({&segment, node, scale});
}

void Run::add(const RecordedSegment& segment, double scale) {
  const double widest = 1 / (least_intervals_ * options_.finer);
  for (std::size_t i = 0; i < segment.nodes.size(); ++i) {
    const CurveNode& node = segment.nodes[i];
    if (i > 0 && segment.nodes[i - 1].piece == node.piece) {
      const CurveNode& last = segment.nodes[i - 1];
      const double length = node.fraction - last.fraction;
      const int parts = std::max(options_.finer, static_cast<int>(std::ceil(length / widest)));
      for (int k = 1; k < parts; ++k)
        add_point(segment, between(last, node, static_cast<double>(k) / parts), scale);
    }
    add_point(segment, node, scale);
  }
  begin_ += scale;
}

void Run::solve(bool rest_at_begin, bool rest_at_end, double begin_time, Profile& out) const {
  const PathSpeed speed = time_optimal_speed(grid_, rest_at_begin, rest_at_end);
  const std::size_t n = points_.size();
  for (std::size_t i = 0; i < n; ++i) {
    const Point& p = points_[i];
    const double rate = std::sqrt(speed.square[i]) / p.scale;
    // The interval that begins here has the acceleration; the last point and those before a jump have that
    // before them.
    const bool last = i + 1 == n || !(grid_.parameter[i + 1] > grid_.parameter[i]);
    const double u = speed.acceleration[last ? i - 1 : i] / p.scale;
    ProfilePoint point;
    point.segment = p.segment->index;
    point.fraction = p.node.fraction;
    point.time = begin_time + speed.time[i];
    point.rate = rate;
    point.tcp_speed = p.node.tcp_rate * rate;
    point.joints = p.node.q;
    point.speeds = p.node.first * rate;
    point.accelerations = p.node.first * u + p.node.second * (rate * rate);
    double& duration = out.durations[static_cast<std::size_t>(p.segment->index - 1)];
    const bool first_of_segment = i == 0 || points_[i - 1].segment != p.segment;
    if (!first_of_segment) duration += speed.time[i] - speed.time[i - 1];
    out.points.push_back(std::move(point));
  }
  out.grid_points += static_cast<long>(n);
  duration_ = speed.duration();
}

/// Joint rates at a node in shares of the limits.
std::vector<double> shares(const RecordedSegment& segment, const CurveNode& node,
                           const std::vector<RateLimit>& limits) {
  std::vector<double> out;
  std::size_t external = 0;
  for (const RateLimit& limit : limits) {
    const double rate = limit.terms.empty() ? segment.external[external++] : limit.of(node.first);
    out.push_back(limit.speed ? rate / *limit.speed : 0.0);
  }
  return out;
}

double norm(const std::vector<double>& v) {
  double sum = 0;
  for (double x : v) sum += x * x;
  return std::sqrt(sum);
}

/// The ratio of the second's rates to the first's at the waypoint between them, if they have one direction.
std::optional<double> passage(const RecordedSegment& in, const RecordedSegment& out,
                              const std::vector<RateLimit>& limits) {
  const std::vector<double> a = shares(in, in.nodes.back(), limits);
  const std::vector<double> b = shares(out, out.nodes.front(), limits);
  const double size_a = norm(a);
  const double size_b = norm(b);
  if (!(size_a > 0) || !(size_b > 0)) return std::nullopt;
  double difference = 0;
  for (std::size_t i = 0; i < a.size(); ++i) difference += std::pow(a[i] / size_a - b[i] / size_b, 2);
  if (std::sqrt(difference) > same_direction) return std::nullopt;
  return size_b / size_a;
}

}  // namespace

Profile time_optimal_profile(const Recording& recording, const Path& path, const Cell& cell,
                             const ProfileOptions& options) {
  const std::vector<RateLimit> limits = rate_limits(cell, options.reserve);
  const bool ramps =
      std::ranges::any_of(limits, [](const RateLimit& l) { return l.acceleration.has_value(); });
  Profile out;
  out.durations.assign(recording.segments.size(), 0.0);
  if (!ramps) {
    out.notes.emplace_back(
        "The cell gives no acceleration limits: the profile is that of the speed limits alone, without "
        "ramps.");
  }
  double time = 0;
  std::optional<Run> chain;
  const auto finish = [&] {
    if (!chain) return;
    chain->solve(ramps, ramps, time, out);
    time += chain->duration();
    chain.reset();
  };
  double scale = 1;
  for (std::size_t i = 0; i < recording.segments.size(); ++i) {
    const RecordedSegment& segment = recording.segments[i];
    const bool usable = segment.hopeless.empty() && segment.duration > 0;
    if (!usable) {
      finish();
      out.durations[i] = segment.duration;
      time += segment.duration;
      if (!segment.hopeless.empty()) {
        const SegmentResult& s = recording.result.segments[i];
        out.notes.push_back("The segment from " + s.from + " to " + s.to +
                            " is left out: " + segment.hopeless + ".");
      }
    } else {
      std::optional<double> ratio;
      if (chain) ratio = passage(recording.segments[i - 1], segment, limits);
      if (chain && !ratio) finish();
      scale = ratio ? scale * *ratio : segment.duration;
      if (!chain) chain.emplace(limits, options, least_intervals(recording.segments.size()));
      chain->add(segment, scale);
    }
    const double dwell = path.waypoints[i + 1].dwell;
    if (dwell > 0) {
      finish();
      time += dwell;
    }
  }
  finish();
  out.duration = time;
  return out;
}

}  // namespace pathvet
