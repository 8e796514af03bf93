#include "path_checker.hpp"

#include <algorithm>
#include <cmath>

#include "moving_frame.hpp"
#include "pathvet/tracking/nearest.hpp"
#include "positioner_check.hpp"

namespace pathvet {
namespace {

/// How far the joints beside a pose may miss it (contract, section 3).
constexpr double taught_position = 1.0;  // mm
constexpr double taught_orientation = 0.5 * radians_per_degree;
/// How far an arrival may differ from the taught configuration.
constexpr double mismatch_angle = 0.5 * radians_per_degree;
constexpr double mismatch_length = 0.5;  // mm
/// A pose is met again, and the configuration is the same, within these.
constexpr double same_position = 1e-6;     // mm
constexpr double same_orientation = 1e-8;  // rad
constexpr double same_joints = 1e-6;       // rad or mm
constexpr std::size_t most_visits = 1000;  // that are looked back at
constexpr double half_turn = 1e-9;         // rad; a turn nearer to pi has no short way

Pose tool_of(const Cell& cell, std::optional<int> tool) {
  return tool ? cell.tools[static_cast<std::size_t>(*tool)].placement : Pose{};
}

int bound_rows(Orientation orientation) {
  return orientation == Orientation::full ? 6 : orientation == Orientation::axis ? 5 : 3;
}

bool binds(Orientation orientation) {
  return orientation == Orientation::full;
}

/// The pose's miss at given joints, as far as the orientation binds.
std::pair<double, double> miss(const Pose& wanted, const Pose& now, Orientation orientation) {
  const double position = (wanted.position - now.position).norm();
  if (orientation == Orientation::free) return {position, 0.0};
  if (orientation == Orientation::axis) {
    const Vector3 a = wanted.rotation.col(2);
    const Vector3 b = now.rotation.col(2);
    return {position, std::atan2(a.cross(b).norm(), a.dot(b))};
  }
  return {position, rotation_vector(wanted.rotation * now.rotation.transpose()).norm()};
}

}  // namespace

ToolContext::ToolContext(const Arm& the_arm, const Pose& tool, Orientation orientation)
    : chain(the_arm, tool),
      finder(the_arm, tool),
      branches(the_arm, orientation, tool),
      arm{the_arm, chain, finder, branches, orientation} {}

PathChecker::PathChecker(const Path& path, const Cell& cell, const CheckOptions& options,
                         CheckObserver* observer)
    : path_(path),
      cell_(cell),
      options_(options),
      observer_(observer),
      axes_(axes_of(cell.arm)),
      positioner_axes_(positioner_axes(cell)),
      plan_(path, cell,
            {[this](int i) {
               return context(waypoint(i).tool, Orientation::full).chain.forward(*waypoint(i).joints);
             },
             [this](int i) -> std::shared_ptr<const MovingFrame> {
               const Waypoint& w = waypoint(i);
               if (!w.frame) return nullptr;
               const Frame& frame = cell_.frames[static_cast<std::size_t>(*w.frame)];
               if (!frame.carried_by) return nullptr;
               const auto carrier = static_cast<std::size_t>(*frame.carried_by);
               const JointVector& to = w.external[carrier];
               const JointVector& from = i > 0 ? waypoint(i - 1).external[carrier] : to;
               return std::make_shared<CarriedFrame>(cell_.positioners[carrier], frame.placement, from, to);
             }}) {}

const ToolContext& PathChecker::context(std::optional<int> tool, Orientation orientation) {
  auto& found = contexts_[{tool.value_or(-1), static_cast<int>(orientation)}];
  if (!found) found = std::make_unique<ToolContext>(cell_.arm, tool_of(cell_, tool), orientation);
  return *found;
}

const ToolContext& PathChecker::context(int index) {
  return context(waypoint(index).tool, waypoint(index).orientation);
}

/// The solution of a waypoint's pose that its joints stand for: the nearest, turned towards them.
std::optional<JointVector> PathChecker::exact_at(int index, const JointVector& near) {
  const ToolContext& c = context(index);
  std::vector<JointVector> found = c.finder.find(plan_.programmed(index), waypoint(index).orientation).joints;
  for (JointVector& q : found) q = turned_towards(cell_.arm, q, near);
  const auto i = nearest(cell_.arm, near, found);
  if (!i) return std::nullopt;
  // At a singular pose the solutions form a continuum, of which the finder names one: the joints themselves
  // are another, if they meet the pose.
  const auto [position, orientation] =
      miss(plan_.programmed(index), c.chain.forward(near), waypoint(index).orientation);
  if (position < position_tolerance && orientation < orientation_tolerance &&
      (found[*i] - near).cwiseAbs().maxCoeff() > 0.1)
    return near;
  return found[*i];
}

std::vector<Fault> PathChecker::faults() {
  std::vector<Fault> out;
  const auto fault = [&](const Waypoint& w, const std::string& what) {
    out.push_back({path_.file, w.place, what});
  };
  for (int i = 0; i < static_cast<int>(path_.waypoints.size()); ++i) {
    const Waypoint& w = waypoint(i);
    const bool chooses = w.joints && w.pose && (w.move == Move::start || w.move == Move::joint);
    if (chooses) {
      const auto [position, orientation] =
          miss(plan_.programmed(i), context(i).chain.forward(*w.joints), w.orientation);
      if (position > taught_position || orientation > taught_orientation) {
        fault(w, "the joints of waypoint \"" + w.id + "\" miss its pose by " + std::to_string(position) +
                     " mm and " + std::to_string(orientation * degrees_per_radian) +
                     " degrees; expected joints that meet the pose within 1 mm and 0.5 degrees");
      }
    }
    if (w.move != Move::linear && w.move != Move::circular) continue;
    if (!binds(w.orientation) || !binds(waypoint(i - 1).orientation)) continue;
    const auto [turn, is_arc] = plan_.shape(i);
    if (turn > pi - half_turn)
      fault(w, "the orientation turns by 180 degrees on the way to waypoint \"" + w.id +
                   "\", which has no short way; add a waypoint between");
    if (w.move == Move::circular && !is_arc)
      fault(w, "start, via and end of the arc to waypoint \"" + w.id +
                   "\" lie on one line or coincide; expected three points that carry a circle");
  }
  return out;
}

std::optional<JointVector> PathChecker::taught_start() {
  const Waypoint& w = path_.waypoints.front();
  if (!w.joints) return std::nullopt;
  if (!w.pose) return w.joints;
  return exact_at(0, *w.joints).value_or(*w.joints);
}

std::vector<JointVector> PathChecker::starts() {
  const Waypoint& w = path_.waypoints.front();
  const std::vector<JointVector> found = context(0).finder.find(plan_.programmed(0), w.orientation).joints;
  std::vector<JointVector> inside;
  for (const JointVector& q : found) {
    const std::vector<JointVector> turns = turns_inside_limits(cell_.arm, q);
    inside.insert(inside.end(), turns.begin(), turns.end());
  }
  return inside.empty() ? found : inside;
}

bool PathChecker::starts_complete() {
  return context(0).finder.find(plan_.programmed(0), waypoint(0).orientation).complete;
}

/// The target of a joint move (contract, section 4).
std::optional<JointVector> PathChecker::joint_target(int index, const JointVector& from) {
  const Waypoint& w = waypoint(index);
  if (w.joints && !w.pose) return w.joints;
  if (w.joints) return exact_at(index, *w.joints).value_or(*w.joints);
  const ToolContext& c = context(index);
  const std::vector<JointVector> found = c.finder.find(plan_.programmed(index), w.orientation).joints;
  const std::string signs = c.branches.signs(from);
  std::vector<JointVector> inside, same, all;
  for (const JointVector& q : found) {
    const bool same_branch = c.branches.signs(q) == signs;
    const JointVector turned = turned_towards(cell_.arm, q, from);
    all.push_back(turned);
    if (!same_branch) continue;
    same.push_back(turned);
    const std::vector<JointVector> turns = turns_inside_limits(cell_.arm, q);
    inside.insert(inside.end(), turns.begin(), turns.end());
    // A continuous joint has no limits: any whole turn will do, so the nearest one.
    if (inside_limits(cell_.arm, turned)) inside.push_back(turned);
  }
  for (const auto* pool : {&inside, &same, &all}) {
    if (const auto i = nearest(cell_.arm, from, *pool)) return (*pool)[*i];
  }
  return std::nullopt;
}

PathResult PathChecker::run(const JointVector& start, bool reached, bool taught) {
  PathResult result;
  result.file = path_.file;
  result.name = path_.name;
  result.cell_file = path_.cell_file;
  result.cell = cell_.name;
  result.arm = cell_.arm.name;
  result.characteristic_length = cell_.arm.characteristic_length;
  result.start = start;
  result.start_branch = branch_ = context(0).branches.signs(start);
  result.start_taught = taught;
  result.joint_count = cell_.arm.joint_count();
  for (const std::vector<Axis>* axes : {&axes_, &positioner_axes_}) {
    for (const Axis& axis : *axes) {
      AxisResult entry;
      entry.name = axis.name;
      entry.type = axis.type;
      entry.lower = axis.lower;
      entry.upper = axis.upper;
      entry.speed_limit = axis.speed;
      result.axes.push_back(std::move(entry));
    }
  }
  result.notes = plan_.notes();
  Arrival at{start, reached};
  visits_.clear();
  visits_.push_back({waypoint(0).tool, plan_.programmed(0), start});
  const int count = static_cast<int>(path_.waypoints.size());
  for (int i = 1; i < count; ++i) {
    at = waypoint(i).move == Move::joint ? joint_segment(i, at, result) : cartesian_segment(i, at, result);
    if (result.stopped) break;
    if (observer_ && !observer_->progress(static_cast<double>(i) / (count - 1))) {
      result.stopped = true;
      break;
    }
  }
  result.proven_fraction = cartesian_length_ > 0 ? std::min(1.0, proven_length_ / cartesian_length_) : 1.0;
  std::stable_sort(result.findings.begin(), result.findings.end(), [](const Finding& a, const Finding& b) {
    return std::tie(a.segment, a.begin, a.code, a.axis) < std::tie(b.segment, b.begin, b.code, b.axis);
  });
  for (std::size_t i = 0; i < result.findings.size(); ++i)
    result.segments[static_cast<std::size_t>(result.findings[i].segment - 1)].findings.push_back(
        static_cast<int>(i));
  return result;
}

Pose PathChecker::frame_at_arrival(int index) const {
  const Waypoint& w = waypoint(index);
  if (!w.frame) return {};
  const Frame& frame = cell_.frames[static_cast<std::size_t>(*w.frame)];
  if (!frame.carried_by) return frame.placement;
  const auto carrier = static_cast<std::size_t>(*frame.carried_by);
  return Chain(as_arm(cell_.positioners[carrier]), frame.placement).forward(w.external[carrier]);
}

PathChecker::Arrival PathChecker::joint_segment(int index, const Arrival& from, PathResult& result) {
  const Waypoint& w = waypoint(index);
  const ToolContext& c = context(index);
  const std::optional<JointVector> target = joint_target(index, from.q);
  const JointMove move(cell_.arm, c.chain, from.q, target.value_or(from.q), w.joint_rate);
  SegmentResult segment;
  segment.length = move.length();
  segment.turn = move.turn();
  segment.duration = move.duration();
  segment.branch = c.branches.signs(from.q);
  const Pose frame = frame_at_arrival(index);
  SegmentContext context{c.arm,
                         axes_,
                         options_,
                         index,
                         move.duration(),
                         false,
                         result.length,
                         result.duration,
                         [&](double fraction) { return move.length_at(fraction); },
                         [&](double) { return frame; },
                         [&](double) { return plan_.programmed(index); }};
  SegmentChecker checker(context, move, observer_);
  if (observer_) observer_->begin_segment({index, nullptr, c.chain, move.duration()});
  move.run({options_.step_length, options_.step_angle}, checker);
  if (!target) {
    checker.lost(0.0, from.q);
    checker.finish();
    // A joint move has no way of its own to a pose out of reach: the whole of it is flagged, worst at its
    // end.
    for (Finding& f : checker.findings()) {
      if (f.code != Code::out_of_reach) continue;
      f.peak = 1;
    }
  } else {
    checker.finish();
    branch_ = c.branches.signs(*target);
  }
  absorb(index, std::move(segment), checker, context, from.q, target.value_or(from.q), result);
  return {target.value_or(from.q), target.has_value()};
}

PathChecker::Arrival PathChecker::cartesian_segment(int index, const Arrival& from, PathResult& result) {
  const Waypoint& w = waypoint(index);
  const ToolContext& c = context(index);
  // After a waypoint that left part of the orientation free the motion starts where the tool really is.
  std::optional<Pose> start;
  if (from.reached && !binds(waypoint(index - 1).orientation) &&
      waypoint(index - 1).orientation != w.orientation)
    start = c.chain.forward(from.q);
  const SegmentMotion motion = plan_.segment(index, start);
  SegmentResult segment;
  segment.length = motion.length();
  segment.turn = motion.turn();
  segment.duration = motion.duration();
  segment.turn_on_the_spot = motion.on_the_spot();
  segment.branch = branch_;
  const std::unique_ptr<Follower> follower =
      make_follower(c.arm, motion, {options_.step_length, options_.step_angle});
  const auto piece_of = [&](double fraction) {
    int piece = 0;
    while (piece + 1 < motion.piece_count() && fraction > motion.piece_end(piece)) ++piece;
    return piece;
  };
  SegmentContext context{c.arm,
                         axes_,
                         options_,
                         index,
                         motion.duration(),
                         true,
                         result.length,
                         result.duration,
                         [&](double fraction) { return motion.length_at(fraction); },
                         [&](double fraction) { return motion.frame(fraction); },
                         [&](double fraction) {
                           CurvePoint point;
                           motion.at(piece_of(fraction), fraction, point);
                           return point.pose;
                         }};
  SegmentChecker checker(context, *follower, observer_);
  if (observer_) observer_->begin_segment({index, &motion, c.chain, motion.duration()});
  const Follower::End end = follower->run(from.q, from.reached, branch_, checker);
  result.stopped = result.stopped || end.stopped;
  if (w.joints && end.reached) taught_mismatch(index, end.q, context, checker);
  checker.finish();
  // Where nothing but the orientation moves, the turn stands in for the length.
  const double measure = motion.length() > 0 ? motion.length() : motion.turn();
  cartesian_length_ += measure;
  proven_length_ += checker.proven_length() * measure;
  if (end.reached && cell_.arm.joint_count() > bound_rows(w.orientation)) segment.drift = drift(index, end.q);
  absorb(index, std::move(segment), checker, context, from.q, end.q, result);
  return {end.q, end.reached};
}

/// An arm with joints to spare need not come back to the configuration in which it met a pose before.
std::optional<JointVector> PathChecker::drift(int index, const JointVector& arrived) {
  const Pose pose = plan_.programmed(index);
  std::optional<JointVector> out;
  for (auto it = visits_.rbegin(); it != visits_.rend(); ++it) {
    if (it->tool != waypoint(index).tool || !((it->pose.position - pose.position).norm() < same_position) ||
        !(rotation_vector(it->pose.rotation * pose.rotation.transpose()).norm() < same_orientation))
      continue;
    const JointVector change = arrived - it->joints;
    if (change.cwiseAbs().maxCoeff() > same_joints) out = change;
    break;
  }
  visits_.push_back({waypoint(index).tool, pose, arrived});
  if (visits_.size() > most_visits) visits_.pop_front();
  return out;
}

void PathChecker::taught_mismatch(int index, const JointVector& arrived, const SegmentContext& context,
                                  SegmentChecker& checker) {
  const JointVector& taught = *waypoint(index).joints;
  int worst = -1;
  double worst_share = 1;
  for (int i = 0; i < cell_.arm.joint_count(); ++i) {
    const bool angular = cell_.arm.joints[static_cast<std::size_t>(i)].type == JointType::revolute;
    const double share = std::abs(arrived[i] - taught[i]) / (angular ? mismatch_angle : mismatch_length);
    if (share > worst_share * (1 + limit_tolerance)) {
      worst = i;
      worst_share = share;
    }
  }
  if (worst < 0) return;
  Finding f;
  f.code = Code::taught_mismatch;
  f.segment = index;
  f.axis = worst;
  f.begin = f.end = f.peak = 1;
  f.begin_length = f.end_length = f.peak_length = context.length_at(1.0);
  f.begin_time = f.end_time = f.peak_time = context.duration;
  f.value = arrived[worst] - taught[worst];
  f.limit = taught[worst];
  f.quantity = cell_.arm.joints[static_cast<std::size_t>(worst)].type == JointType::revolute
                   ? Quantity::angle
                   : Quantity::length;
  f.joints = arrived;
  f.from_joints = arrived;
  f.to_joints = taught;
  f.pose = context.frame(1.0).inverse() * context.arm.chain.forward(arrived);
  checker.add(std::move(f));
}

void PathChecker::absorb(int index, SegmentResult segment, SegmentChecker& checker,
                         const SegmentContext& context, const JointVector& begin, const JointVector& end,
                         PathResult& result) {
  const Waypoint& w = waypoint(index);
  segment.index = index;
  segment.from = waypoint(index - 1).id;
  segment.to = w.id;
  segment.move = w.move;
  segment.place = w.place;
  segment.dwell = w.dwell;
  segment.samples = checker.samples();
  segment.min_singular_value = checker.min_singular_value();
  segment.ratio_profile = checker.ratio_profile();

  segment.peak_tcp_speed = checker.peak_tcp_speed();
  if (const auto [point, speed] = checker.fastest_point(); point >= 0) {
    segment.peak_point_speed = speed;
    segment.peak_point = checker.point_name(point);
  }

  std::vector<AxisTally> tallies = checker.tallies();
  if (!positioner_axes_.empty()) {
    std::vector<AxisTally> more;
    check_positioners(checker, context, positioner_axes_, static_cast<int>(axes_.size()),
                      positioner_joints(waypoint(index - 1)), positioner_joints(w), begin, end, more);
    tallies.insert(tallies.end(), more.begin(), more.end());
  }
  double least = std::numeric_limits<double>::infinity();
  for (std::size_t i = 0; i < tallies.size(); ++i) {
    const AxisTally& t = tallies[i];
    AxisResult& axis = result.axes[i];
    if (!t.any) continue;
    const bool first = index == 1;
    axis.min = first ? t.min : std::min(axis.min, t.min);
    axis.max = first ? t.max : std::max(axis.max, t.max);
    axis.travel += t.travel;
    if (t.peak_ratio > axis.peak_ratio) {
      axis.peak_ratio = t.peak_ratio;
      axis.peak_speed = t.peak_speed;
    }
    if (t.peak_ratio > segment.peak_ratio) {
      segment.peak_ratio = t.peak_ratio;
      segment.peak_axis = static_cast<int>(i);
    }
    if (axis.lower) {
      // Angles and lengths are compared by the margins that the contract gives them by default: 3 degrees to
      // 10 mm.
      const double unit = axis.type == JointType::revolute ? 3 * radians_per_degree : 10.0;
      const double room = std::min(t.min - *axis.lower, *axis.upper - t.max);
      if (room / unit < least) {
        least = room / unit;
        segment.limit_margin = room;
        segment.limit_margin_axis = static_cast<int>(i);
      }
    }
  }
  bool unbounded = false;
  for (const Finding& f : checker.findings()) unbounded = unbounded || f.unbounded;
  if (unbounded) segment.peak_ratio = std::numeric_limits<double>::infinity();
  if (!unbounded && segment.peak_ratio > 0 && segment.duration > 0) {
    const double programmed = w.move == Move::joint      ? w.joint_rate
                              : segment.turn_on_the_spot ? segment.turn / segment.duration
                                                         : segment.length / segment.duration;
    segment.highest_speed = programmed / segment.peak_ratio;
    if (w.move == Move::joint) segment.highest_speed = std::min(1.0, *segment.highest_speed);
    for (Finding& f : checker.findings()) {
      if (f.code == Code::joint_speed) f.helpful_speed = programmed / f.ratio;
      if (f.code == Code::speed_margin) f.helpful_speed = programmed * options_.speed_margin / f.ratio;
      if (f.code == Code::arm_speed) f.helpful_speed = programmed / f.ratio;
      if (f.code == Code::joint_acceleration) f.helpful_speed = programmed / std::sqrt(f.ratio);
    }
  }
  result.position_residual = std::max(result.position_residual, checker.position_residual());
  result.orientation_residual = std::max(result.orientation_residual, checker.orientation_residual());
  result.length += segment.length;
  result.duration += segment.duration + segment.dwell;
  result.samples += segment.samples;
  for (Finding& f : checker.findings()) result.findings.push_back(std::move(f));
  result.segments.push_back(std::move(segment));
}

}  // namespace pathvet
