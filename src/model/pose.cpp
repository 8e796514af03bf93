#include "pathvet/model/pose.hpp"

#include <cmath>

namespace pathvet {

Matrix3 rotation_from_vector(const Vector3& vector) {
  const double angle = vector.norm();
  const double half = 0.5 * angle;
  // sin(x)/x needs no series: for a denormal or zero angle the quotient is taken as its limit.
  const double scale = angle > 0 ? std::sin(half) / angle : 0.5;
  return Eigen::Quaterniond(std::cos(half), scale * vector.x(), scale * vector.y(), scale * vector.z())
      .toRotationMatrix();
}

Vector3 rotation_vector(const Matrix3& rotation) {
  const Eigen::Quaterniond q = quaternion(rotation);
  const double sine = q.vec().norm();
  // 2 atan2(|v|, w) / |v| is well conditioned for every angle; at |v| = 0 its limit is 2 / w.
  const double scale = sine > 0 ? 2.0 * std::atan2(sine, q.w()) / sine : 2.0;
  Vector3 vector = scale * q.vec();
  if (q.w() == 0) {
    for (int i = 0; i < 3; ++i) {
      if (vector[i] == 0) continue;
      if (vector[i] < 0) vector = -vector;
      break;
    }
  }
  return vector;
}

Matrix3 rotation_from_roll_pitch_yaw(double roll, double pitch, double yaw) {
  return (Eigen::AngleAxisd(yaw, Vector3::UnitZ()) * Eigen::AngleAxisd(pitch, Vector3::UnitY()) *
          Eigen::AngleAxisd(roll, Vector3::UnitX()))
      .toRotationMatrix();
}

Eigen::Quaterniond quaternion(const Matrix3& rotation) {
  Eigen::Quaterniond q(rotation);
  q.normalize();
  if (q.w() < 0) q.coeffs() = -q.coeffs();
  return q;
}

}  // namespace pathvet
