#pragma once

#include <doctest/doctest.h>

#include <cmath>
#include <random>

#include "kinematics/reference_arms.hpp"
#include "pathvet/kinematics/configurations.hpp"

namespace pathvet::test {

/// Largest difference of two configurations, whole turns left out (rad; mm for prismatic joints).
inline double apart(const Arm& arm, const JointVector& a, const JointVector& b) {
  double most = 0;
  for (int i = 0; i < arm.joint_count(); ++i) {
    const bool revolute = arm.joints[static_cast<std::size_t>(i)].type == JointType::revolute;
    const double change = b[i] - a[i];
    most = std::max(most, std::abs(revolute ? std::remainder(change, 2 * pi) : change));
  }
  return most;
}

inline bool contains(const Arm& arm, const Configurations& found, const JointVector& q, double tolerance) {
  for (const JointVector& one : found.joints) {
    if (apart(arm, one, q) <= tolerance) return true;
  }
  return false;
}

/// What `find` promises of every configuration: pose met, values wrapped, sorted, each once.
inline void check_promises(const Arm& arm, const Pose& target, const Configurations& found,
                           Orientation orientation = Orientation::full) {
  const Chain chain(arm);
  for (std::size_t k = 0; k < found.joints.size(); ++k) {
    const JointVector& q = found.joints[k];
    const Pose pose = chain.forward(q);
    CHECK((pose.position - target.position).norm() <= 1e-9 * arm.characteristic_length);
    if (orientation == Orientation::full) {
      CHECK(rotation_vector(pose.rotation.transpose() * target.rotation).norm() <= 1.001e-9);
    } else if (orientation == Orientation::axis) {
      CHECK(pose.rotation.col(2).cross(target.rotation.col(2)).norm() <= 1.001e-9);
      CHECK(pose.rotation.col(2).dot(target.rotation.col(2)) > 0);
    }
    for (int i = 0; i < arm.joint_count(); ++i) {
      if (arm.joints[static_cast<std::size_t>(i)].type != JointType::revolute) continue;
      CHECK(q[i] > -pi);
      CHECK(q[i] <= pi);
    }
    for (std::size_t j = 0; j < k; ++j) CHECK(apart(arm, found.joints[j], q) > 1e-9);
    if (k == 0) continue;
    const JointVector& before = found.joints[k - 1];
    for (int i = 0; i < arm.joint_count(); ++i) {
      if (std::abs(q[i] - before[i]) < 2e-9) continue;
      CHECK(before[i] < q[i]);
      break;
    }
  }
}

/// Exactly the listed configurations (degrees), within `tolerance` degrees.
inline void check_exactly(const Arm& arm, const Configurations& found,
                          const std::vector<std::initializer_list<double>>& expected,
                          double tolerance = 1e-4) {
  CHECK(found.joints.size() == expected.size());
  for (const auto& row : expected) {
    CAPTURE(degrees(row).transpose() * degrees_per_radian);
    CHECK(contains(arm, found, degrees(row), tolerance * radians_per_degree));
  }
}

}  // namespace pathvet::test
