#pragma once

#include <Eigen/QR>
#include <array>

#include "kinematics/screw_axes.hpp"

namespace pathvet::detail {

using SixLines = std::array<AxisLine, 6>;

/// The loop e_1 ... e_6 = motion of six revolute joints, with joints 1, 2 and 6 eliminated (Raghavan & Roth
/// 1993).
///
/// With o a point and l the direction of axis 6, e_3 e_4 e_5 and e_2^-1 e_1^-1 motion carry both to the same
/// place p and direction l. The 14 numbers p, l, p.p, p.l, p x l, (p.p) l - 2 (p.l) p of a place and
/// direction change linearly under every rigid motion; so seen from the left they are linear in (1, cos, sin)
/// of q3, of q4 and of q5, and seen from the right in (1, cos, sin) of q1 and of q2. Eliminating the eight
/// products of q1 and q2 leaves six equations in q3, q4, q5; with the half tangents x of q4, q5 and each
/// equation once more times x_4 they are twelve, linear and homogeneous in the twelve monomials x_4^i x_5^j,
/// i <= 3, j <= 2.
class LoopEquations {
 public:
  using Matrix12 = Eigen::Matrix<double, 12, 12>;
  using Vector12 = Eigen::Matrix<double, 12, 1>;

  LoopEquations(const SixLines& lines, const Pose& motion, double length);

  /// The twelve equations at q3 = angle.
  [[nodiscard]] Matrix12 at(double angle) const { return along(1, std::cos(angle), std::sin(angle)); }
  /// constant * C + cosine * A + sine * B, where the equations are C + A cos q3 + B sin q3.
  [[nodiscard]] Matrix12 along(double constant, double cosine, double sine) const;

  /// All six angles from q3 and the monomials at it (up to a factor).
  [[nodiscard]] std::array<double, 6> angles(double q3, const Vector12& monomials) const;

  /// Distance of e_1 ... e_6 from the motion: position over the length plus rotation matrix.
  [[nodiscard]] double miss(const std::array<double, 6>& angles) const;

 private:
  using Block = Eigen::Matrix<double, 14, 9>;
  using Six = Eigen::Matrix<double, 6, 9>;

  void build_left(const Vector3& origin);
  [[nodiscard]] Block build_right(const Vector3& origin) const;

  SixLines lines_;
  Pose motion_;
  double length_;
  std::array<Block, 3> left_;  // times 1, cos q3, sin q3; columns (1, cos, sin) of q4 x (1, cos, sin) of q5
  Eigen::ColPivHouseholderQR<Eigen::Matrix<double, 14, 8>> right_;
  std::array<Six, 3> six_;  // the same three, columns in the half tangents
};

}  // namespace pathvet::detail
