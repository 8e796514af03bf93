#include <algorithm>
#include <cmath>

#include "kinematics/circle_equations.hpp"
#include "pathvet/kinematics/configurations.hpp"
#include "pathvet/model/units.hpp"

namespace pathvet {

namespace {

/// A limit is broken when exceeded by more than this share of its size.
constexpr double limit_slack = 1e-9;

bool holds(double value, double lower, double upper) {
  return value >= lower - limit_slack * std::abs(lower) && value <= upper + limit_slack * std::abs(upper);
}

bool combined_holds(const CombinedLimit& limit, const JointVector& joints) {
  if (!limit.lower || !limit.upper) return true;
  double sum = 0;
  for (const CombinedLimit::Term& term : limit.terms) sum += term.factor * joints[term.joint];
  return holds(sum, *limit.lower, *limit.upper);
}

/// The values that one joint may take, ascending.
std::vector<double> turns_of(const Joint& joint, double value) {
  if (joint.continuous) return {joint.type == JointType::revolute ? detail::wrap_angle(value) : value};
  if (joint.type == JointType::prismatic) {
    return holds(value, joint.lower, joint.upper) ? std::vector<double>{value} : std::vector<double>{};
  }
  std::vector<double> out;
  // One turn more at either end: the slack may let in what the division just misses.
  const double first = std::ceil((joint.lower - value) / (2 * pi)) - 1;
  const double last = std::floor((joint.upper - value) / (2 * pi)) + 1;
  for (double turn = first; turn <= last; ++turn) {
    const double shifted = turn == 0 ? value : value + turn * 2 * pi;
    if (holds(shifted, joint.lower, joint.upper)) out.push_back(shifted);
  }
  return out;
}

void append_turns(const Arm& arm, const std::vector<std::vector<double>>& choices, JointVector& partial,
                  std::size_t joint, std::vector<JointVector>& out) {
  if (joint == choices.size()) {
    const bool all_hold = std::all_of(arm.combined_limits.begin(), arm.combined_limits.end(),
                                      [&](const auto& limit) { return combined_holds(limit, partial); });
    if (all_hold) out.push_back(partial);
    return;
  }
  for (const double value : choices[joint]) {
    partial[static_cast<Eigen::Index>(joint)] = value;
    append_turns(arm, choices, partial, joint + 1, out);
  }
}

}  // namespace

bool inside_limits(const Arm& arm, const JointVector& joints) {
  for (int i = 0; i < arm.joint_count(); ++i) {
    const Joint& joint = arm.joints[static_cast<std::size_t>(i)];
    if (!joint.continuous && !holds(joints[i], joint.lower, joint.upper)) return false;
  }
  return std::all_of(arm.combined_limits.begin(), arm.combined_limits.end(),
                     [&](const auto& limit) { return combined_holds(limit, joints); });
}

std::vector<JointVector> turns_inside_limits(const Arm& arm, const JointVector& joints) {
  std::vector<std::vector<double>> choices;
  for (int i = 0; i < arm.joint_count(); ++i) {
    choices.push_back(turns_of(arm.joints[static_cast<std::size_t>(i)], joints[i]));
    if (choices.back().empty()) return {};
  }
  std::vector<JointVector> out;
  JointVector partial = joints;
  append_turns(arm, choices, partial, 0, out);
  return out;
}

}  // namespace pathvet
