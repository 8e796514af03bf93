#include "kinematics/locked_arm.hpp"

#include <algorithm>

#include "kinematics/pose_solver.hpp"
#include "kinematics/special_six.hpp"

namespace pathvet::detail {

namespace {

bool has_closed_form(const ScrewAxes& axes) {
  const ScrewAxes back = axes.reversed();
  return SphericalWrist::detect(axes) || ThreeParallel::detect(axes) || SphericalWrist::detect(back) ||
         ThreeParallel::detect(back);
}

/// Whether the last joint does nothing but turn the tool about its own z axis.
bool last_turns_tool(const Arm& arm, const Pose& tool) {
  if (arm.joint_count() < 2 || arm.joints.back().type != JointType::revolute) return false;
  const Pose tcp = arm.joints.back().after * arm.flange * tool;
  const Vector3 z = Vector3::UnitZ();
  return z.cross(tcp.rotation.col(2)).norm() <= geometry_tolerance &&
         z.cross(tcp.position).norm() <= geometry_tolerance * arm.characteristic_length;
}

/// The joint's motion at `value` as a fixed placement.
Pose held(const Joint& joint, double value) {
  const Vector3 z = Vector3::UnitZ() * value;
  return joint.type == JointType::revolute ? Pose{rotation_from_vector(z), Vector3::Zero()}
                                           : Pose{Matrix3::Identity(), z};
}

}  // namespace

Arm locked_arm(const Arm& arm, const std::vector<int>& joints, const std::vector<double>& values) {
  Arm out = arm;
  out.joints.clear();
  out.combined_limits.clear();  // limits play no part in solving
  Pose pending;
  for (int i = 0; i < arm.joint_count(); ++i) {
    const Joint& joint = arm.joints[static_cast<std::size_t>(i)];
    const auto place = std::find(joints.begin(), joints.end(), i);
    if (place != joints.end()) {
      const double value = values[static_cast<std::size_t>(place - joints.begin())];
      pending = pending * joint.before * held(joint, value) * joint.after;
      continue;
    }
    out.joints.push_back(joint);
    out.joints.back().before = pending * joint.before;
    pending = {};
  }
  out.flange = pending * arm.flange;
  return out;
}

std::vector<int> joints_to_lock(const Arm& arm, const Pose& tool, Orientation orientation) {
  const int extra = arm.joint_count() - bound_rows(orientation);
  if (orientation == Orientation::axis && extra <= 0 && last_turns_tool(arm, tool))
    return {arm.joint_count() - 1};
  if (extra <= 0) return {};
  std::vector<int> prismatic;
  for (int i = 0; i < arm.joint_count(); ++i) {
    if (arm.joints[static_cast<std::size_t>(i)].type == JointType::prismatic) prismatic.push_back(i);
  }
  if (static_cast<int>(prismatic.size()) == extra) return prismatic;
  if (!prismatic.empty() || extra != 1 || orientation != Orientation::full) return {};
  std::vector<int> order{2};
  for (int i = 0; i < arm.joint_count(); ++i) {
    if (i != 2) order.push_back(i);
  }
  for (const int joint : order) {
    // A value of no meaning: at 0 axes may happen to meet or be parallel.
    const Arm left = locked_arm(arm, {joint}, {0.3});
    if (has_closed_form(ScrewAxes(Chain(left, tool)))) return {joint};
  }
  return {2};
}

}  // namespace pathvet::detail
