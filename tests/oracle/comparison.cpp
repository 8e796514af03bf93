#include "comparison.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <map>

#include "reference_events.hpp"

namespace pathvet::test {
namespace {

constexpr double place_length = 0.01;                     // mm
constexpr double place_turn = 0.01 * radians_per_degree;  // rad
constexpr double rate_share = 1e-4;
constexpr double angle_tolerance = 1e-4 * radians_per_degree;
constexpr double length_tolerance = 1e-4;  // mm

bool is_watched(Code code) {
  return code == Code::joint_limit || code == Code::limit_margin || code == Code::joint_speed ||
         code == Code::speed_margin || code == Code::singular_pass;
}

Pose placement(const Cell& cell, const Waypoint& w) {
  return w.tool ? cell.tools[static_cast<std::size_t>(*w.tool)].placement : Pose{};
}

class Comparison {
 public:
  Comparison(const Cell& cell, const Path& path, const CheckOptions& options, const PathResult& result)
      : cell_(cell), path_(path), options_(options), result_(result) {}

  Verdict run() {
    q_ = *path_.waypoints[0].joints;
    Pose pose = ReferenceArm(cell_.arm, placement(cell_, path_.waypoints[0]), Orientation::full).forward(q_);
    bool whole = true;
    for (std::size_t i = 1; i < path_.waypoints.size() && whole; ++i) {
      const Waypoint& w = path_.waypoints[i];
      pose = pose * placement(cell_, path_.waypoints[i - 1]).inverse() * placement(cell_, w);
      const Pose outer = w.frame ? cell_.frames[static_cast<std::size_t>(*w.frame)].placement : Pose{};
      const Pose end = outer * *w.pose;
      whole = segment(static_cast<int>(i), w, ReferenceMotion(pose, end, w.speed, w.turn_rate));
      pose = end;
    }
    if (whole) whole_path();
    return verdict_;
  }

 private:
  template <typename... Args>
  void differs(fmt::format_string<Args...> format, Args&&... args) {
    verdict_.differences.push_back(fmt::format(format, std::forward<Args>(args)...));
  }

  bool segment(int index, const Waypoint& w, const ReferenceMotion& motion) {
    const ReferenceArm arm(cell_.arm, placement(cell_, w), w.orientation);
    const SegmentResult& reported = result_.segments[static_cast<std::size_t>(index - 1)];
    near("length", index, reported.length, motion.length(), 1e-9);
    near("turn", index, reported.turn, motion.turn(), 1e-9);
    near("duration", index, reported.duration, motion.duration(), 1e-9);
    const double tolerance =
        motion.length() > 1e-6 ? place_length / motion.length() : place_turn / motion.turn();
    double from = 0;
    double ratio = 0;
    double singular = 1e300;
    while (true) {
      const Track track = follow(arm, motion, from, q_);
      if (track.end == TrackEnd::unclear) {
        verdict_.unclear = true;
        return false;
      }
      const Events found = events(arm, motion, track, options_);
      const bool stuck = track.end == TrackEnd::stuck;
      const double last = track.samples.back().fraction;
      // Where an exact pass is taken for what it isn't quite, the two curves differ by what the miss does:
      // the flip and the end count.
      if (track.detour) {
        compare_flips(index, track, from, 2.0, tolerance);
        return false;
      }
      compare_findings(index, found, from, stuck ? last : 2.0, tolerance);
      compare_flips(index, track, from, stuck ? last : 2.0, tolerance);
      for (std::size_t a = 0; a < found.axes.size(); ++a) {
        const Motions& m = found.axes[a];
        ratio = std::max(ratio, m.peak_ratio);
        if (totals_.size() <= a) {
          totals_.push_back(m);
        } else {
          totals_[a].min = std::min(totals_[a].min, m.min);
          totals_[a].max = std::max(totals_[a].max, m.max);
          totals_[a].travel += m.travel;
          totals_[a].peak_ratio = std::max(totals_[a].peak_ratio, m.peak_ratio);
        }
      }
      singular = std::min(singular, found.least_singular);
      q_ = track.samples.back().q;
      if (!stuck) break;
      ++verdict_.horizons;
      ratio = std::numeric_limits<double>::infinity();
      if (!past_horizon(index, arm, motion, last, tolerance)) return false;
      from = last;
    }
    ++verdict_.segments;
    if (std::isfinite(ratio)) {
      near("peak_ratio", index, reported.peak_ratio, ratio, rate_share * ratio);
    }
    if (reported.min_singular_value)
      near("min_singular_value", index, *reported.min_singular_value, singular,
           1e-4 * singular + (std::isfinite(ratio) ? 1e-8 : 1e-6));
    return true;
  }

  void near(const char* what, int index, double reported, double expected, double tolerance) {
    if (!(std::abs(reported - expected) <= tolerance))
      differs("segment {}: {} is reported as {:.12g}, expected {:.12g}", index, what, reported, expected);
  }

  std::vector<const Finding*> reported(int index, double from, double to, double tolerance) const {
    std::vector<const Finding*> out;
    for (const Finding& f : result_.findings) {
      const bool inside = f.begin >= from - tolerance && f.end <= to + tolerance && f.begin < to;
      const bool before = from > 0 && f.end <= from + 1e-9;
      if (f.segment == index && is_watched(f.code) && inside && !before) out.push_back(&f);
    }
    return out;
  }

  void compare_findings(int index, const Events& found, double from, double to, double tolerance) {
    std::vector<const Finding*> left = reported(index, from, to, tolerance);
    for (const Expected& e : found.findings) {
      // By place: the reported one of the same kind that lies nearest.
      const Finding* best = nullptr;
      for (const Finding* f : left) {
        if (f->code != e.code || f->axis != e.axis) continue;
        if (f->begin > e.end + tolerance || e.begin > f->end + tolerance) continue;
        if (!best || std::abs(f->begin - e.begin) < std::abs(best->begin - e.begin)) best = f;
      }
      if (!best) {
        const bool sliver = e.end - e.begin < 1e-9 && (e.begin == from || e.end >= to);
        if (!e.ambiguous && !sliver) differs("segment {}: missed {}", index, describe(e));
        continue;
      }
      std::erase(left, best);
      ++verdict_.findings;
      if (e.ambiguous) continue;
      if (std::abs(best->begin - e.begin) > tolerance || std::abs(best->end - e.end) > tolerance)
        differs("segment {}: {} is reported from {:.12g} to {:.12g}", index, describe(e), best->begin,
                best->end);
      if (e.unbounded) {
        // At a fold or an exact singularity a rate grows without bound or just ends; what counts is the
        // place.
        continue;
      }
      const double reported_value = best->value.value_or(std::nan(""));
      const bool at_fold = e.end >= to;
      const double slack = !at_fold ? 0.0 : is_length(e.axis) ? 1e-1 : 2e-4;
      if (!(std::abs(reported_value - e.value) <= value_tolerance(e) + slack))
        differs("segment {}: {} is reported with value {:.12g}", index, describe(e), reported_value);
    }
    for (const Finding* f : left) {
      const bool sliver = f->end - f->begin < 1e-9;
      if (!sliver)
        differs("segment {}: invented {} axis {} from {:.12g} to {:.12g}, peak {:.12g}, value {:.12g}", index,
                pathvet::name(f->code), f->axis, f->begin, f->end, f->peak, f->value.value_or(std::nan("")));
    }
  }

  void compare_flips(int index, const Track& track, double from, double to, double tolerance) {
    std::vector<double> left = track.flips;
    verdict_.exact += static_cast<int>(left.size());
    for (const Finding& f : result_.findings) {
      if (f.segment != index || f.code != Code::branch_flip || f.begin < from - tolerance || f.begin > to)
        continue;
      const auto match = std::find_if(left.begin(), left.end(),
                                      [&](double at) { return std::abs(at - f.begin) < tolerance; });
      if (match == left.end()) {
        differs("segment {}: invented branch-flip at {:.12g}", index, f.begin);
      } else {
        left.erase(match);
      }
    }
    for (const double at : left) differs("segment {}: missed branch-flip at {:.12g}", index, at);
  }

  static std::string describe(const Expected& e) {
    return fmt::format("{} axis {} from {:.12g} to {:.12g}, peak {:.12g}, value {:.12g}",
                       pathvet::name(e.code), e.axis, e.begin, e.end, e.peak, e.value);
  }

  [[nodiscard]] double value_tolerance(const Expected& e) const {
    if (e.code == Code::joint_speed || e.code == Code::speed_margin) return rate_share * std::abs(e.value);
    if (e.code == Code::singular_pass) return 1e-4 * e.value + 1e-8;
    return std::max(angle_tolerance, 1e-9) * (is_length(e.axis) ? length_tolerance / angle_tolerance : 1.0);
  }

  [[nodiscard]] bool is_length(int axis) const {
    return axis < cell_.arm.joint_count() &&
           cell_.arm.joints[static_cast<std::size_t>(axis)].type == JointType::prismatic;
  }

  /// Where the reference can't go on: a jump or the end of the reach has to be reported there. True with q_
  /// at the jump's target.
  bool past_horizon(int index, const ReferenceArm& arm, const ReferenceMotion& motion, double at,
                    double tolerance) {
    const double ahead = std::max(1e-12, 1e-3 / std::max({motion.length(), 500 * motion.turn(), 1e-9}));
    if (at + ahead > 1) return false;
    const std::vector<Column> solutions = arm.solutions(motion.at(at + ahead).pose, 150);
    const Finding* jump = nullptr;
    const Finding* lost = nullptr;
    for (const Finding& f : result_.findings) {
      if (f.segment != index || std::abs(f.begin - at) > tolerance) continue;
      if (f.code == Code::joint_jump) jump = &f;
      if (f.code == Code::out_of_reach) lost = &f;
    }
    if (solutions.empty()) {
      if (!lost) differs("segment {}: missed out-of-reach from {:.12g}", index, at);
      return false;
    }
    if (!jump) {
      differs("segment {}: missed joint-jump at {:.12g} ({} solutions beyond{})", index, at, solutions.size(),
              lost ? ", out-of-reach reported" : "");
      return false;
    }
    // The jump's target is one of the solutions, and none is nearer in time (inside the limits, where one
    // is).
    Column landed = column_of(jump->to_joints);
    if (!arm.solve(motion.at(at).pose, landed) && !arm.solve(motion.at(at + ahead).pose, landed)) {
      differs("segment {}: the jump at {:.12g} does not land on the path", index, at);
      return false;
    }
    if ((landed - column_of(jump->to_joints)).cwiseQuotient(arm.scale()).cwiseAbs().maxCoeff() > 1e-2)
      differs("segment {}: the jump at {:.12g} lands beside a solution", index, at);
    Column ahead_landed = landed;
    if (!arm.solve(motion.at(at + ahead).pose, ahead_landed)) return false;
    check_jump_is_least(index, arm, *jump, solutions, ahead_landed);
    ++verdict_.jumps;
    q_ = landed;
    if (!arm.solve(motion.at(at).pose, q_)) return false;
    return true;
  }

  static bool inside(const Arm& arm, const Column& q) {
    for (int i = 0; i < arm.joint_count(); ++i) {
      const Joint& joint = arm.joints[static_cast<std::size_t>(i)];
      if (!joint.continuous && (q[i] < joint.lower - 1e-7 || q[i] > joint.upper + 1e-7)) return false;
    }
    for (const CombinedLimit& limit : arm.combined_limits) {
      double sum = 0;
      for (const auto& term : limit.terms) sum += term.factor * q[term.joint];
      if (limit.lower && (sum < *limit.lower - 1e-7 || sum > *limit.upper + 1e-7)) return false;
    }
    return true;
  }

  void check_jump_is_least(int index, const ReferenceArm& arm, const Finding& jump,
                           const std::vector<Column>& solutions, const Column& landed) {
    const Column from = column_of(jump.from_joints);
    const auto least = [&](bool within) {
      double best = 1e300;
      for (const Column& solution : solutions) {
        // Every whole-turn variant within two turns, joint by joint: the time is a maximum, so joints are
        // independent but for combined limits.
        Column q = solution;
        bool possible = true;
        for (Eigen::Index i = 0; i < q.size(); ++i) {
          const Joint& joint = arm.model().joints[static_cast<std::size_t>(i)];
          if (joint.type != JointType::revolute) continue;
          double nearest = 1e300;
          for (int k = -4; k <= 4; ++k) {
            const double v = solution[i] + 2 * pi * k;
            if (within && !joint.continuous && (v < joint.lower || v > joint.upper)) continue;
            if (std::abs(v - from[i]) < std::abs(nearest - from[i])) nearest = v;
          }
          possible = possible && nearest < 1e299;
          q[i] = nearest;
        }
        if (!possible || (within && !inside(arm.model(), q))) continue;
        best = std::min(best, pathvet::test::least_time(arm.model(), from, q));
      }
      return best;
    };
    const double within = least(true);
    const double best = within < 1e299 ? within : least(false);
    const double taken = pathvet::test::least_time(arm.model(), from, landed);
    // The seeds may have missed a solution, so that only a slower jump is wrong.
    if (taken > 1.01 * best + 1e-6)
      differs("segment {}: the jump takes {:.9g} s, the nearest solution {:.9g} s", index, taken, best);
    if (within < 1e299 && !inside(arm.model(), landed))
      differs("segment {}: the jump leads outside the limits though a solution lies inside", index);
  }

  void whole_path() {
    for (std::size_t a = 0; a < totals_.size(); ++a) {
      const AxisResult& axis = result_.axes[a];
      const Motions& m = totals_[a];
      // Crossing an exact singularity the reference leaves out the detour of the miss. At a fold the joints
      // end like a square root: rounding of the path moves them by far more.
      const double tolerance = (axis.type == JointType::revolute ? angle_tolerance : length_tolerance) *
                               (verdict_.exact > 0      ? 1000
                                : verdict_.horizons > 0 ? 100
                                                        : 1);
      const auto check = [&](const char* what, double reported, double expected, double by) {
        if (!(std::abs(reported - expected) <= by))
          differs("axis {}: {} is reported as {:.12g}, expected {:.12g}", a, what, reported, expected);
      };
      check("min", axis.min, m.min, tolerance);
      check("max", axis.max, m.max, tolerance);
      if (verdict_.jumps == 0) check("travel", axis.travel, m.travel, 10 * tolerance + 1e-5 * m.travel);
      if (verdict_.horizons == 0 && axis.speed_limit)
        check("peak_ratio", axis.peak_ratio, m.peak_ratio,
              (verdict_.exact > 0 ? 0.1 : rate_share) * m.peak_ratio + (verdict_.exact > 0 ? 0.2 : 1e-9));
    }
  }

  const Cell& cell_;
  const Path& path_;
  const CheckOptions& options_;
  const PathResult& result_;
  Column q_;
  std::vector<Motions> totals_;
  Verdict verdict_;
};

}  // namespace

Verdict compare(const Cell& cell, const Path& path, const CheckOptions& options, const PathResult& result) {
  return Comparison(cell, path, options, result).run();
}

}  // namespace pathvet::test
