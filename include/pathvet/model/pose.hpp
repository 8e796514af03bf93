#pragma once

#include <Eigen/Core>
#include <Eigen/Geometry>

namespace pathvet {

using Vector3 = Eigen::Vector3d;
using Vector6 = Eigen::Matrix<double, 6, 1>;
using Matrix3 = Eigen::Matrix3d;

/// A rigid placement of one frame in another (ISO 8373: pose). `a_b * b_c` is the pose of c in a.
struct Pose {
  Matrix3 rotation = Matrix3::Identity();
  Vector3 position = Vector3::Zero();  ///< mm

  [[nodiscard]] Pose operator*(const Pose& inner) const {
    return {rotation * inner.rotation, rotation * inner.position + position};
  }
  [[nodiscard]] Vector3 operator*(const Vector3& point) const { return rotation * point + position; }
  [[nodiscard]] Pose inverse() const { return {rotation.transpose(), -(rotation.transpose() * position)}; }
};

/// Rotation by |vector| rad about `vector`; exact (no small-angle branch) for any length, zero included.
[[nodiscard]] Matrix3 rotation_from_vector(const Vector3& vector);

/// The rotation vector (axis times angle, rad, angle in [0, pi]) of a rotation matrix; accurate at 0 and near
/// pi, where the axis' sign is the one whose first non-zero component is positive.
[[nodiscard]] Vector3 rotation_vector(const Matrix3& rotation);

/// `Rz(yaw) Ry(pitch) Rx(roll)`, angles in rad.
[[nodiscard]] Matrix3 rotation_from_roll_pitch_yaw(double roll, double pitch, double yaw);

/// Unit quaternion of a rotation, w >= 0.
[[nodiscard]] Eigen::Quaterniond quaternion(const Matrix3& rotation);

}  // namespace pathvet
