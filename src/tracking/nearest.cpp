#include "pathvet/tracking/nearest.hpp"

#include <cmath>

#include "pathvet/kinematics/configurations.hpp"
#include "pathvet/model/units.hpp"

namespace pathvet {
namespace {

/// Two times or sums that differ by less than this share are a tie: they come from solutions good to 1e-9.
constexpr double tie = 1e-8;

double shares(const Arm& arm, const JointVector& from, const JointVector& to) {
  double sum = 0;
  for (int i = 0; i < arm.joint_count(); ++i)
    sum += std::abs(to[i] - from[i]) / arm.joints[static_cast<std::size_t>(i)].speed;
  return sum;
}

bool differ(double a, double b) {
  return std::abs(a - b) > tie * (std::abs(a) + std::abs(b)) + 1e-12;
}

}  // namespace

double least_time(const Arm& arm, const JointVector& from, const JointVector& to) {
  double most = 0;
  for (int i = 0; i < arm.joint_count(); ++i)
    most = std::max(most, std::abs(to[i] - from[i]) / arm.joints[static_cast<std::size_t>(i)].speed);
  return most;
}

bool nearer(const Arm& arm, const JointVector& from, const JointVector& a, const JointVector& b) {
  const double time_a = least_time(arm, from, a);
  const double time_b = least_time(arm, from, b);
  if (differ(time_a, time_b)) return time_a < time_b;
  const double sum_a = shares(arm, from, a);
  const double sum_b = shares(arm, from, b);
  if (differ(sum_a, sum_b)) return sum_a < sum_b;
  for (int i = 0; i < arm.joint_count(); ++i) {
    if (differ(a[i], b[i])) return a[i] < b[i];
  }
  return false;
}

std::optional<std::size_t> nearest(const Arm& arm, const JointVector& from,
                                   const std::vector<JointVector>& candidates) {
  std::optional<std::size_t> best;
  for (std::size_t i = 0; i < candidates.size(); ++i) {
    if (!best || nearer(arm, from, candidates[i], candidates[*best])) best = i;
  }
  return best;
}

JointVector turned_towards(const Arm& arm, const JointVector& q, const JointVector& reference) {
  JointVector out = q;
  for (int i = 0; i < arm.joint_count(); ++i) {
    if (arm.joints[static_cast<std::size_t>(i)].type == JointType::revolute)
      out[i] += 2 * pi * std::round((reference[i] - q[i]) / (2 * pi));
  }
  return out;
}

std::optional<JointVector> jump_target(const Arm& arm, const JointVector& from,
                                       const std::vector<JointVector>& solutions) {
  std::vector<JointVector> inside;
  std::vector<JointVector> all;
  for (const JointVector& q : solutions) {
    all.push_back(turned_towards(arm, q, from));
    JointVector held = all.back();
    for (int i = 0; i < arm.joint_count(); ++i) {
      const Joint& joint = arm.joints[static_cast<std::size_t>(i)];
      if (joint.type != JointType::revolute || joint.continuous) continue;
      // The variant nearest to `from` among those inside the joint's own range.
      if (held[i] > joint.upper) held[i] -= 2 * pi * std::ceil((held[i] - joint.upper) / (2 * pi));
      if (held[i] < joint.lower) held[i] += 2 * pi * std::ceil((joint.lower - held[i]) / (2 * pi));
    }
    if (inside_limits(arm, held)) inside.push_back(held);
  }
  if (const auto i = nearest(arm, from, inside)) return inside[*i];
  if (const auto i = nearest(arm, from, all)) return all[*i];
  return std::nullopt;
}

}  // namespace pathvet
