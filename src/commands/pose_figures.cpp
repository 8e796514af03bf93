#include "commands/pose_figures.hpp"

#include <Eigen/Dense>
#include <algorithm>
#include <cmath>

#include "pathvet/kinematics/configurations.hpp"
#include "pathvet/kinematics/singular_values.hpp"

namespace pathvet::commands {
namespace {

/// Sum over the joints of the distance from the middle of the limits, as a share of half the range.
double distance_from_middle(const Arm& arm, const JointVector& joints) {
  double sum = 0;
  for (int i = 0; i < arm.joint_count(); ++i) {
    const Joint& joint = arm.joints[static_cast<std::size_t>(i)];
    const double half_range = 0.5 * (joint.upper - joint.lower);
    if (joint.continuous || !(half_range > 0)) continue;
    sum += std::abs(joints[i] - 0.5 * (joint.lower + joint.upper)) / half_range;
  }
  return sum;
}

std::vector<std::optional<double>> margins(const Arm& arm, const JointVector& joints) {
  std::vector<std::optional<double>> found;
  for (int i = 0; i < arm.joint_count(); ++i) {
    const Joint& joint = arm.joints[static_cast<std::size_t>(i)];
    if (joint.continuous) {
      found.emplace_back();
    } else {
      found.emplace_back(std::min(joints[i] - joint.lower, joint.upper - joints[i]));
    }
  }
  return found;
}

}  // namespace

PoseFigures::PoseFigures(const Arm& arm, const Pose& tool, const Pose& frame, Orientation orientation)
    : arm_(arm),
      chain_(arm, tool),
      world_from_frame_inverse_(frame.inverse()),
      orientation_(orientation),
      branches_(arm, orientation) {}

ConfigurationReport PoseFigures::of(const JointVector& joints) const {
  ConfigurationReport report;
  report.joints = joints;
  report.pose = world_from_frame_inverse_ * chain_.forward(joints);
  report.branch = branches_.signs(joints);
  const Eigen::MatrixXd jacobian = bound_jacobian(chain_, joints, orientation_);
  const Eigen::JacobiSVD<Eigen::MatrixXd> svd(jacobian);
  report.singular_values.assign(svd.singularValues().begin(), svd.singularValues().end());
  if (jacobian.rows() == jacobian.cols()) report.determinant = jacobian.determinant();
  report.inside_limits = inside_limits(arm_, joints);
  report.margins = margins(arm_, joints);
  return report;
}

std::vector<JointVector> variants_inside(const Arm& arm, const JointVector& joints, bool all) {
  std::vector<JointVector> inside = turns_inside_limits(arm, joints);
  if (all || inside.size() < 2) return inside;
  const auto nearer = [&arm](const JointVector& one, const JointVector& other) {
    return distance_from_middle(arm, one) < distance_from_middle(arm, other);
  };
  return {*std::ranges::min_element(inside, nearer)};
}

}  // namespace pathvet::commands
