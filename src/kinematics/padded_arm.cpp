#include "kinematics/padded_arm.hpp"

#include <algorithm>

#include "kinematics/multi_start.hpp"
#include "pathvet/model/units.hpp"

namespace pathvet::detail {

namespace {

constexpr int polish_steps = 30;

Joint revolute(const Pose& before) {
  Joint joint;
  joint.type = JointType::revolute;
  joint.continuous = true;
  joint.before = before;
  joint.after = before.inverse();
  return joint;
}

/// An axis of no meaning near the TCP, another for each index.
Pose anywhere(int index, double length) {
  const double i = index;
  const Vector3 turn(1.1 + 0.37 * i, -0.7 + 0.53 * i, 0.45 - 0.41 * i);
  const Vector3 place(0.31 - 0.17 * i, 0.23 + 0.29 * i, -0.37 + 0.19 * i);
  return {rotation_from_vector(turn), length * place};
}

Arm padded(const Arm& arm, const Pose& tool, Orientation orientation) {
  Arm out = arm;
  const std::size_t wanted = orientation == Orientation::free ? 3 : 6;
  const bool about_tool = orientation == Orientation::axis;
  std::vector<Joint> added;
  for (int i = 0; out.joints.size() + added.size() + (about_tool ? 1 : 0) < wanted; ++i) {
    added.push_back(revolute(anywhere(i, arm.characteristic_length)));
  }
  if (about_tool) added.push_back(revolute({}));
  if (added.empty()) {
    out.flange = arm.flange * tool;
    return out;
  }
  added.front().before = arm.flange * tool * added.front().before;
  out.joints.insert(out.joints.end(), added.begin(), added.end());
  out.flange = {};
  return out;
}

/// Whether the Jacobian has full rank anywhere: with two axes in line or four parallel, say, it has not.
bool ever_regular(const Chain& chain) {
  constexpr int places = 3;
  const SpreadPoints points(chain.joint_count());
  for (int i = 1; i <= places; ++i) {
    const JointVector q = 2 * pi * points.point(i);
    if (PoseSolver(chain, Orientation::full).rank(chain.forward(q), q) == chain.joint_count()) return true;
  }
  return false;
}

}  // namespace

std::optional<PaddedArm> PaddedArm::make(const Arm& arm, const Pose& tool, Orientation orientation) {
  const bool all_revolute = std::all_of(arm.joints.begin(), arm.joints.end(),
                                        [](const Joint& joint) { return joint.type == JointType::revolute; });
  if (!all_revolute || arm.joint_count() > bound_rows(orientation)) return std::nullopt;
  const Chain chain(padded(arm, tool, orientation));
  if (orientation != Orientation::free && !ever_regular(chain)) return std::nullopt;
  const ScrewAxes axes(chain);
  PaddedArm out;
  out.joints_ = arm.joint_count();
  if (orientation == Orientation::free) {
    out.position_.emplace(axes, axes.home.position);
    if (!out.position_->solvable()) return std::nullopt;
  } else {
    out.six_.emplace(axes);
  }
  return out;
}

bool PaddedArm::solve(const Pose& target, SolutionSet& solutions) const {
  bool all = true;
  const auto offer = [&](const auto& candidate) {
    JointVector q(joints_);
    for (int i = 0; i < joints_; ++i) q[i] = candidate.q[static_cast<std::size_t>(i)];
    if (solutions.offer(q, polish_steps) && candidate.free) all = false;
  };
  if (position_) {
    std::vector<ThreeAngles> candidates;
    candidates.reserve(4);
    all = position_->solve(target.position, candidates);
    for (const ThreeAngles& candidate : candidates) offer(candidate);
  } else {
    std::vector<SixAngles> candidates;
    candidates.reserve(16);
    all = six_->solve(target, candidates);
    for (const SixAngles& candidate : candidates) offer(candidate);
    if (!six_->closed_form()) all = all && !solutions.any_singular();
  }
  return all;
}

}  // namespace pathvet::detail
