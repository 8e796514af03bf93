#pragma once

#include <array>
#include <cmath>

#include "pathvet/kinematics/chain.hpp"

namespace pathvet::detail {

/// A joint's axis as a line in space. Rotation about it by q maps X to point + Rot(direction, q)(X - point).
struct AxisLine {
  Vector3 point;
  Vector3 direction;  ///< unit

  [[nodiscard]] AxisLine moved(const Pose& by) const { return {by * point, by.rotation * direction}; }
};

/// `vector` turned about the unit vector `axis`.
[[nodiscard]] inline Vector3 turned(const Vector3& vector, const Vector3& axis, double angle) {
  const double c = std::cos(angle);
  const double s = std::sin(angle);
  return c * vector + s * axis.cross(vector) + (1 - c) * axis.dot(vector) * axis;
}

[[nodiscard]] inline Vector3 turned_about(const Vector3& x, const AxisLine& line, double angle) {
  return line.point + turned(x - line.point, line.direction, angle);
}

/// The rotation about a line as a placement.
[[nodiscard]] Pose turn_about(const AxisLine& line, double angle);

/// Angle by which `from` has to be turned about the unit vector `axis` so that it points, seen along the
/// axis, as `to` does. 0 where one of the two is along the axis.
[[nodiscard]] double angle_about(const Vector3& axis, const Vector3& from, const Vector3& to);

/// How two lines lie to each other: the feet of their common normal (for parallel lines: through the first's
/// point).
struct CommonNormal {
  Vector3 foot_first;
  Vector3 foot_second;
  double distance = 0;
  double sine = 0;  ///< of the angle between the directions, >= 0
};
[[nodiscard]] CommonNormal common_normal(const AxisLine& first, const AxisLine& second);

/// Directions nearer than this (rad) count as parallel, lines nearer than this share of the characteristic
/// length as meeting: the rounding of an arm written with a few digits of pi, far below anything that could
/// be built.
inline constexpr double geometry_tolerance = 1e-10;

/// The arm's axes (world frame) and its TCP's pose with every joint at zero. With e_i the rotation about line
/// i by q_i the forward map is e_1 e_2 ... e_n home (product of exponentials, Brockett 1984).
struct ScrewAxes {
  int count = 0;
  std::array<AxisLine, max_joints> lines;
  Pose home;
  double length = 1;  ///< characteristic length, mm

  explicit ScrewAxes(const Chain& chain);

  [[nodiscard]] const AxisLine& operator[](int i) const { return lines[static_cast<std::size_t>(i)]; }
  [[nodiscard]] bool parallel(int i, int j) const;
  [[nodiscard]] bool meet(int i, int j) const;  ///< in exactly one point
  /// The same arm seen from the TCP: joint values in reversed order, target the inverse pose.
  [[nodiscard]] ScrewAxes reversed() const;
};

}  // namespace pathvet::detail
