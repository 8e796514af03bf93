#include "pathvet/retiming/recording.hpp"

#include <algorithm>
#include <cmath>

#include "pathvet/kinematics/chain.hpp"
#include "pathvet/tracking/hermite.hpp"

namespace pathvet {
namespace {

/// Nodes are as dense as it takes for a joint's rate between them to be straight to this share of the
/// greatest rate there (in shares of the limits), or of a fifth of the programmed time's worth, whichever is
/// more.
constexpr double straightness = 1e-3;
constexpr double slow_share = 0.2;
constexpr int most_splits = 6;
/// A rate of the fraction by arc length below this share of its unit is a fold (as in the checks).
constexpr double stalled = 1e-7;

/// Records the steps of a check, and passes the progress on.
class Recorder final : public CheckObserver {
 public:
  Recorder(const Path& path, const Cell& cell, CheckObserver* progress)
      : path_(path), limits_(rate_limits(cell, 0)), progress_(progress) {}

  bool progress(double share) override { return progress_ == nullptr || progress_->progress(share); }
  void begin_segment(const SegmentStart& start) override;
  void step(int segment, const Step& step, const StepSampler& sampler) override;

  std::vector<RecordedSegment> segments;

 private:
  struct Sample {
    double t = 0;
    bool usable = false;
    CurveNode node;
  };

  [[nodiscard]] Sample place(const Step& step, double t, const Node& node) const;
  [[nodiscard]] double tcp_rate(const CurveNode& node) const;
  void refine(const Step& step, const StepSampler& sampler, const Sample& a, const Sample& b, int depth);
  [[nodiscard]] bool straight(const CurveNode& a, const CurveNode& b) const;
  void keep(const Sample& sample);

  const Path& path_;
  std::vector<RateLimit> limits_;
  CheckObserver* progress_;
  const Chain* chain_ = nullptr;
};

void Recorder::begin_segment(const SegmentStart& start) {
  chain_ = &start.chain;
  RecordedSegment segment;
  segment.index = start.segment;
  if (start.motion) segment.motion = *start.motion;
  segment.duration = start.duration;
  const Waypoint& from = path_.waypoints[static_cast<std::size_t>(start.segment - 1)];
  const Waypoint& to = path_.waypoints[static_cast<std::size_t>(start.segment)];
  for (std::size_t i = 0; i < to.external.size(); ++i) {
    for (Eigen::Index k = 0; k < to.external[i].size(); ++k)
      segment.external.push_back(to.external[i][k] - from.external[i][k]);
  }
  segments.push_back(std::move(segment));
}

/// mm per fraction that the TCP moves in its waypoint's frame.
double Recorder::tcp_rate(const CurveNode& node) const {
  const std::optional<SegmentMotion>& motion = segments.back().motion;
  if (!motion || !motion->has_moving_frame()) return (chain_->jacobian(node.q) * node.first).head<3>().norm();
  const double begin = motion->piece_begin(node.piece);
  const double end = motion->piece_end(node.piece);
  constexpr double share = 1e-4;
  const double from = std::max(begin, node.fraction - share * (end - begin));
  const double to = std::min(end, node.fraction + share * (end - begin));
  return to > from ? (motion->length_at(to) - motion->length_at(from)) / (to - from) : 0.0;
}

Recorder::Sample Recorder::place(const Step& step, double t, const Node& node) const {
  Sample out;
  out.t = t;
  const double rate = node.fraction_rate;
  if (step.kind != Step::Kind::fraction && std::abs(rate) < stalled * step.fraction_unit) return out;
  out.node.fraction = node.fraction;
  out.node.piece = step.piece;
  out.node.q = node.q;
  out.node.first = node.rate / rate;
  out.node.second = (node.rate_rate - out.node.first * node.fraction_rate_rate) / (rate * rate);
  out.usable = out.node.first.allFinite() && out.node.second.allFinite() && rate > 0;
  return out;
}

bool Recorder::straight(const CurveNode& a, const CurveNode& b) const {
  const double h = b.fraction - a.fraction;
  double worst = 0;
  double fastest = slow_share * segments.back().duration;
  for (const RateLimit& limit : limits_) {
    if (limit.terms.empty() || !limit.speed) continue;
    const double bend = std::abs(limit.of(JointVector(b.second - a.second))) * h / 8;
    worst = std::max(worst, bend / *limit.speed);
    fastest = std::max(
        {fastest, std::abs(limit.of(a.first)) / *limit.speed, std::abs(limit.of(b.first)) / *limit.speed});
  }
  return worst <= straightness * fastest;
}

void Recorder::keep(const Sample& sample) {
  RecordedSegment& segment = segments.back();
  if (!sample.usable) {
    segment.unbounded = true;
    return;
  }
  if (!segment.nodes.empty()) {
    const CurveNode& last = segment.nodes.back();
    if (last.piece == sample.node.piece && !(sample.node.fraction > last.fraction)) return;
  }
  segment.nodes.push_back(sample.node);
  segment.nodes.back().tcp_rate = tcp_rate(sample.node);
}

void Recorder::refine(const Step& step, const StepSampler& sampler, const Sample& a, const Sample& b,
                      int depth) {
  if (depth >= most_splits || !a.usable || !b.usable || straight(a.node, b.node)) {
    keep(b);
    return;
  }
  Node middle;
  const double t = 0.5 * (a.t + b.t);
  sampler.at(step, t, middle);
  const Sample half = place(step, t, middle);
  refine(step, sampler, a, half, depth + 1);
  refine(step, sampler, half, b, depth + 1);
}

void Recorder::step(int /*segment*/, const Step& step, const StepSampler& sampler) {
  const RecordedSegment& segment = segments.back();
  const Sample begin = place(step, 0, step.begin);
  const Sample end = place(step, step.length, step.end);
  if (segment.nodes.empty() || segment.nodes.back().piece != step.piece) keep(begin);
  refine(step, sampler, begin, end, 0);
}

/// Why a change of speed is no help on a segment.
void judge(Recording& recording) {
  const auto blame = [](RecordedSegment& segment, const char* why) {
    if (segment.hopeless.empty()) segment.hopeless = why;
  };
  for (RecordedSegment& segment : recording.segments) {
    if (segment.unbounded) blame(segment, "a joint's speed grows without bound");
    if (segment.duration > 0 && segment.nodes.size() < 2) blame(segment, "it could not be followed");
  }
  for (const Finding& finding : recording.result.findings) {
    RecordedSegment& segment = recording.segments[static_cast<std::size_t>(finding.segment - 1)];
    if (finding.code == Code::joint_jump) blame(segment, "the configuration has to jump");
    if (finding.code == Code::branch_flip) blame(segment, "the arm changes branch");
    if (finding.code == Code::out_of_reach) blame(segment, "it leaves the arm's reach");
    if (finding.unbounded) blame(segment, "a joint's speed grows without bound");
  }
}

}  // namespace

std::vector<RateLimit> rate_limits(const Cell& cell, double reserve) {
  std::vector<RateLimit> out;
  const double kept = 1 - reserve;
  const auto scaled = [kept](std::optional<double> limit) {
    if (limit) *limit *= kept;
    return limit;
  };
  for (int i = 0; i < cell.arm.joint_count(); ++i) {
    const Joint& joint = cell.arm.joints[static_cast<std::size_t>(i)];
    out.push_back({joint.name, {{i, 1.0}}, kept * joint.speed, scaled(joint.acceleration)});
  }
  for (const CombinedLimit& combined : cell.arm.combined_limits) {
    RateLimit limit{combined.name, {}, scaled(combined.speed), {}};
    for (const CombinedLimit::Term& term : combined.terms) limit.terms.push_back({term.joint, term.factor});
    out.push_back(std::move(limit));
  }
  for (const Positioner& positioner : cell.positioners) {
    for (const Joint& joint : positioner.joints)
      out.push_back({positioner.name + "." + joint.name, {}, kept * joint.speed, scaled(joint.acceleration)});
  }
  return out;
}

Reading<Recording> record_path(const Path& path, const Cell& cell, const CheckOptions& options,
                               CheckObserver* progress) {
  Recorder recorder(path, cell, progress);
  Reading<PathResult> checked = check_path(path, cell, options, &recorder);
  Reading<Recording> out;
  out.faults = std::move(checked.faults);
  if (!checked.value) return out;
  out.value = Recording{std::move(*checked.value), std::move(recorder.segments)};
  if (!out.value->result.stopped) judge(*out.value);
  return out;
}

CurveNode between(const CurveNode& a, const CurveNode& b, double share) {
  Step step;
  step.length = b.fraction - a.fraction;
  step.begin.fraction = a.fraction;
  step.end.fraction = b.fraction;
  step.begin.q = a.q;
  step.begin.rate = a.first;
  step.begin.rate_rate = a.second;
  step.end.q = b.q;
  step.end.rate = b.first;
  step.end.rate_rate = b.second;
  Node node;
  interpolate(step, share * step.length, node);
  CurveNode out;
  out.fraction = a.fraction + share * step.length;
  out.piece = a.piece;
  out.q = node.q;
  out.first = node.rate;
  out.second = node.rate_rate;
  out.tcp_rate = a.tcp_rate + share * (b.tcp_rate - a.tcp_rate);
  return out;
}

}  // namespace pathvet
