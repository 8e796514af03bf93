#pragma once

#include <fmt/format.h>

#include <cmath>
#include <initializer_list>
#include <vector>

#include "pathvet/model/arm.hpp"
#include "pathvet/model/units.hpp"

/// Arms of the reference cases, lengths in mm, angles in degrees as printed.
namespace pathvet::test {

struct Row {
  double theta, d, a, alpha;
};

inline Pose turn(const Vector3& axis, double degrees) {
  return {rotation_from_vector(axis * degrees * radians_per_degree), Vector3::Zero()};
}

inline Pose shift(double x, double y, double z) {
  return {Matrix3::Identity(), Vector3(x, y, z)};
}

inline void add_joint(Arm& arm, const Pose& before, const Pose& after, double length,
                      JointType type = JointType::revolute) {
  Joint joint;
  joint.name = fmt::format("J{}", arm.joint_count() + 1);
  joint.type = type;
  joint.lower = type == JointType::revolute ? -pi : -1000;
  joint.upper = type == JointType::revolute ? pi : 1000;
  joint.speed = 1;
  joint.before = before;
  joint.after = after;
  joint.link_length = length;
  arm.joints.push_back(joint);
}

inline void set_length(Arm& arm) {
  double sum = arm.flange.position.norm();
  for (const Joint& joint : arm.joints) sum += joint.link_length;
  arm.characteristic_length = sum > 0 ? 0.5 * sum : 1;
}

/// Distal rows: Rz(theta) Tz(d) | motion | Tx(a) Rx(alpha).
inline Arm distal(const std::vector<Row>& rows, const std::vector<int>& prismatic = {}) {
  Arm arm;
  for (const Row& row : rows) {
    add_joint(arm, turn(Vector3::UnitZ(), row.theta) * shift(0, 0, row.d),
              shift(row.a, 0, 0) * turn(Vector3::UnitX(), row.alpha), std::hypot(row.a, row.d));
  }
  for (const int i : prismatic) {
    Joint& joint = arm.joints[static_cast<std::size_t>(i)];
    joint.type = JointType::prismatic;
    joint.lower = -1000;
    joint.upper = 1000;
    joint.link_length = 1000;
  }
  set_length(arm);
  return arm;
}

/// Proximal rows, given in the order (alpha, a, theta, d): Rx(alpha) Tx(a) Rz(theta) Tz(d) | motion.
inline Arm proximal(const std::vector<std::array<double, 4>>& rows, const Pose& flange = {}) {
  Arm arm;
  for (const auto& [alpha, a, theta, d] : rows) {
    add_joint(arm,
              turn(Vector3::UnitX(), alpha) * shift(a, 0, 0) * turn(Vector3::UnitZ(), theta) * shift(0, 0, d),
              {}, std::hypot(a, d));
  }
  arm.flange = flange;
  set_length(arm);
  return arm;
}

inline JointVector degrees(std::initializer_list<double> values) {
  JointVector q(static_cast<Eigen::Index>(values.size()));
  Eigen::Index i = 0;
  for (const double value : values) q[i++] = value * radians_per_degree;
  return q;
}

/// 1.1: planar arm of three links.
inline Arm planar_three(double a1, double a2, double a3) {
  return distal({{0, 0, a1, 0}, {0, 0, a2, 0}, {0, 0, a3, 0}});
}

/// 1.3: anthropomorphic arm (Siciliano et al., section 2.9.4).
inline Arm anthropomorphic() {
  return distal({{0, 0, 0, 90}, {0, 0, 500, 0}, {0, 0, 400, 0}});
}

/// 1.5: anthropomorphic arm with spherical wrist (Siciliano et al., section 2.9.7).
inline Arm spherical_wrist_arm() {
  return distal(
      {{0, 0, 0, 90}, {0, 0, 500, 0}, {0, 0, 0, 90}, {0, 400, 0, -90}, {0, 0, 0, 90}, {0, 100, 0, 0}});
}

/// 1.7: Craig, section 3.7, with lengths of our own.
inline Arm craig_arm(double a2 = 430, double a3 = 20, double d3 = 125, double d4 = 432) {
  return proximal(
      {{0, 0, 0, 0}, {-90, 0, 0, 0}, {0, a2, 0, d3}, {-90, a3, 0, d4}, {90, 0, 0, 0}, {-90, 0, 0, 0}});
}

/// 1.8: an arm of the same kind in distal parameters.
inline Arm distal_craig_arm() {
  return distal({{0, 0, 0, 90},
                 {0, 0, 431.8, 0},
                 {0, 150.05, 20.3, -90},
                 {0, 431.8, 0, 90},
                 {0, 0, 0, -90},
                 {0, 0, 0, 0}});
}

/// 1.9: three parallel axes, no spherical wrist (Lynch & Park, Modern Robotics, example 4.5).
inline Arm three_parallel_arm() {
  Arm arm = distal(
      {{0, 89, 0, 90}, {0, 0, -425, 0}, {0, 0, -392, 0}, {0, 109, 0, 90}, {0, 95, 0, -90}, {0, 82, 0, 0}});
  arm.base = turn(Vector3::UnitZ(), 180);
  return arm;
}

/// 2.7: Manseur & Doty 1989, lengths times 1000.
inline Arm sixteen_solutions_arm() {
  return distal(
      {{0, 0, 300, 90}, {0, 0, 1000, 1}, {0, 200, 0, 90}, {0, 0, 1500, 1}, {0, 0, 0, 90}, {0, 0, 0, 1}});
}

/// 2.8: cuspidal orthogonal arm of three joints (Wenger), lengths times 100.
inline Arm cuspidal_three() {
  return proximal({{0, 0, 0, 0}, {-90, 100, 0, 100}, {90, 200, 0, 0}}, shift(150, 0, 0));
}

}  // namespace pathvet::test
