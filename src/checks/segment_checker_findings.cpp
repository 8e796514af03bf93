#include <algorithm>
#include <cmath>

#include "reach.hpp"
#include "segment_checker.hpp"
#include "singular_detail.hpp"

// How an open stretch becomes a finding, and what jumps, flips and lost reach add to them.

namespace pathvet {

void SegmentChecker::open(Watch& watch, const Node& node) {
  watch.open = true;
  watch.tainted = watch.unbounded = false;
  watch.begin = watch.peak = node.fraction;
  watch.score = -std::numeric_limits<double>::infinity();
  watch.joints = node.q;
}

void SegmentChecker::widen(Watch& watch, const Node& node, double score) {
  // Values that agree to rounding are one peak: the earlier place stands.
  const bool first = std::isinf(watch.score);
  if (watch.unbounded || (!first && !(score > watch.score + 1e-13 * std::abs(watch.score)))) return;
  watch.score = score;
  watch.peak = node.fraction;
  watch.joints = node.q;
}

Finding SegmentChecker::finding(Code code, int axis, double begin, double end, double peak,
                                const JointVector& joints) const {
  Finding f;
  f.code = code;
  f.segment = context_.index;
  f.axis = axis;
  f.begin = begin;
  f.end = end;
  f.peak = peak;
  f.begin_length = context_.length_at(begin);
  f.end_length = context_.length_at(end);
  f.peak_length = context_.length_at(peak);
  f.begin_time = begin * context_.duration;
  f.end_time = end * context_.duration;
  f.peak_time = peak * context_.duration;
  f.joints = joints;
  f.pose = context_.frame(peak).inverse() * context_.arm.chain.forward(joints);
  return f;
}

void SegmentChecker::close(Watch& watch, double fraction) {
  if (!watch.open) return;
  watch.open = false;
  const Axis* axis = watch.axis >= 0 ? &context_.axes[static_cast<std::size_t>(watch.axis)] : nullptr;
  if (watch.code == Code::limit_margin && !(watch.score > watch.least)) return;
  Finding f = finding(watch.code, watch.axis, watch.begin, fraction, watch.peak, watch.joints);
  f.limit = watch.limit;
  f.unbounded = watch.unbounded;
  const bool angular = axis && axis->type == JointType::revolute;
  switch (watch.code) {
    case Code::joint_limit:
      f.value = axis->of(watch.joints);
      f.quantity = angular ? Quantity::angle : Quantity::length;
      break;
    case Code::limit_margin:
      f.value = watch.limit - watch.score;
      f.quantity = angular ? Quantity::angle : Quantity::length;
      break;
    case Code::joint_speed:
    case Code::speed_margin:
      f.quantity = angular ? Quantity::angular_speed : Quantity::linear_speed;
      if (!watch.unbounded) {
        f.value = watch.sign * watch.score;
        f.ratio = watch.score / *axis->speed;
      }
      break;
    case Code::joint_acceleration:
      f.quantity = angular ? Quantity::angular_acceleration : Quantity::linear_acceleration;
      if (!watch.unbounded) {
        f.value = watch.sign * watch.score;
        f.ratio = watch.score / *axis->acceleration;
      }
      break;
    case Code::arm_speed:
      f.quantity = Quantity::linear_speed;
      f.point = points_.name(watch.point);
      if (!watch.unbounded) {
        f.value = watch.score;
        f.ratio = watch.score / watch.limit;
      }
      break;
    case Code::singular_pass:
      f.quantity = Quantity::pure;
      f.value = -watch.score;
      f.singular = singular_detail(context_.arm, watch.joints);
      break;
    default:
      break;
  }
  findings_.push_back(std::move(f));
}

void SegmentChecker::close_all(double fraction) {
  fresh_ = true;
  for (Watch& watch : watches_) close(watch, fraction);
  for (Watch& watch : point_watches_) close(watch, fraction);
  close(singular_, fraction);
  close(unproven_, fraction);
  before_.reset();
  falling_ = false;
  singular_at_begin_.reset();
}

void SegmentChecker::add(Finding f) {
  findings_.push_back(std::move(f));
}

void SegmentChecker::flip(double fraction, const Node& before, const Node& after) {
  Finding f =
      finding(Code::branch_flip, -1, fraction, fraction, fraction, JointVector(0.5 * (before.q + after.q)));
  f.from_joints = before.q;
  f.to_joints = after.q;
  f.from_branch = context_.arm.branches.signs(before.q);
  f.to_branch = context_.arm.branches.signs(after.q);
  findings_.push_back(std::move(f));
}

void SegmentChecker::jump(double fraction, const JointVector& from, const JointVector& to) {
  close_all(fraction);
  anew_ = true;
  Finding f = finding(Code::joint_jump, -1, fraction, fraction, fraction, from);
  f.from_joints = from;
  f.to_joints = to;
  f.from_branch = context_.arm.branches.signs(from);
  f.to_branch = context_.arm.branches.signs(to);
  findings_.push_back(std::move(f));
}

void SegmentChecker::lost(double fraction, const JointVector& last) {
  close_all(fraction);
  lost_at_ = fraction;
  lost_joints_ = last;
}

void SegmentChecker::regained(double fraction, const JointVector& /*at*/) {
  if (!lost_at_) return;
  anew_ = true;
  const Miss miss = worst_miss(context_.arm, context_.target, *lost_at_, fraction, lost_joints_);
  Finding f = finding(Code::out_of_reach, -1, *lost_at_, fraction, miss.fraction, miss.joints);
  f.value = miss.holds_orientation || !miss.holds_position ? miss.position : miss.orientation;
  f.quantity = miss.holds_orientation || !miss.holds_position ? Quantity::length : Quantity::angle;
  f.position_miss = miss.position;
  f.orientation_miss = miss.orientation;
  findings_.push_back(std::move(f));
  lost_at_.reset();
}

void SegmentChecker::finish() {
  close_all(1.0);
  if (lost_at_) regained(1.0, lost_joints_);
  // Margins beside the matching error of the same joint, and unproven stretches with something worse on them,
  // say nothing new.
  const auto overlaps = [](const Finding& a, const Finding& b) {
    return a.begin <= b.end && b.begin <= a.end;
  };
  // A jump parts what touches there, as a waypoint does: the margin on its one side is not beside the error
  // on the other.
  std::vector<double> jumps;
  for (const Finding& f : findings_) {
    if (f.code == Code::joint_jump) jumps.push_back(f.begin);
  }
  const auto parted = [&](const Finding& a, const Finding& b) {
    return std::any_of(jumps.begin(), jumps.end(), [&](double at) {
      return (a.end == at && b.begin == at) || (b.end == at && a.begin == at);
    });
  };
  std::erase_if(findings_, [&](const Finding& f) {
    return std::any_of(findings_.begin(), findings_.end(), [&](const Finding& other) {
      if (!overlaps(f, other) || (f.code != Code::unproven && parted(f, other))) return false;
      if (f.code == Code::limit_margin) return other.code == Code::joint_limit && other.axis == f.axis;
      if (f.code == Code::speed_margin) return other.code == Code::joint_speed && other.axis == f.axis;
      return f.code == Code::unproven && level(other.code) == Level::error;
    });
  });
}

}  // namespace pathvet
