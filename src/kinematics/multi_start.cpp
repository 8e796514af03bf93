#include "kinematics/multi_start.hpp"

#include <cmath>

#include "pathvet/model/units.hpp"

namespace pathvet::detail {

namespace {

constexpr int most_seeds = 4096;
constexpr int most_steps = 60;

}  // namespace

SpreadPoints::SpreadPoints(int dimensions) : steps_(dimensions) {
  double root = 1.5;
  for (int i = 0; i < 64; ++i) root = std::pow(1 + root, 1.0 / (dimensions + 1));
  for (int i = 0; i < dimensions; ++i) steps_[i] = std::pow(root, -(i + 1));
}

JointVector SpreadPoints::point(int index) const {
  JointVector out(steps_.size());
  for (Eigen::Index i = 0; i < steps_.size(); ++i) {
    const double value = 0.5 + index * steps_[i];
    out[i] = value - std::floor(value);
  }
  return out;
}

SeedBox whole_box(const Arm& arm) {
  SeedBox box = limit_box(arm);
  for (int i = 0; i < arm.joint_count(); ++i) {
    if (arm.joints[static_cast<std::size_t>(i)].type != JointType::revolute) continue;
    box.lower[i] = -pi;
    box.upper[i] = pi;
  }
  return box;
}

SeedBox limit_box(const Arm& arm) {
  SeedBox box{JointVector(arm.joint_count()), JointVector(arm.joint_count())};
  for (int i = 0; i < arm.joint_count(); ++i) {
    const Joint& joint = arm.joints[static_cast<std::size_t>(i)];
    const bool revolute = joint.type == JointType::revolute;
    const double endless = revolute ? pi : 4 * arm.characteristic_length;
    box.lower[i] = std::isfinite(joint.lower) ? joint.lower : -endless;
    box.upper[i] = std::isfinite(joint.upper) ? joint.upper : endless;
  }
  return box;
}

void search_from_seeds(const SeedBox& box, int patience, int most_found, SolutionSet& solutions) {
  const SpreadPoints points(static_cast<int>(box.lower.size()));
  int idle = 0;
  for (int i = 0; i < most_seeds && idle < patience && solutions.size() < most_found; ++i) {
    const JointVector seed = box.lower + (box.upper - box.lower).cwiseProduct(points.point(i));
    idle = solutions.offer(seed, most_steps) ? 0 : idle + 1;
  }
}

}  // namespace pathvet::detail
