#pragma once

#include <array>
#include <vector>

#include "kinematics/screw_axes.hpp"

namespace pathvet::detail {

/// The values of the first three joints, and whether one of them is a representative of a whole circle.
struct ThreeAngles {
  std::array<double, 3> q{};
  bool free = false;
};

/// How three revolute joints carry a point: finds all q with e_1 e_2 e_3 point = target.
///
/// Method: turning about axes 1 and 2 keeps the distance from, and the height along, axis 1 that the target
/// has; with the second joint eliminated this leaves one equation of degree two in cos q3, sin q3 (Pieper
/// 1968; a quartic in tan(q3/2)). Where axes 2 and 3 are parallel, or axis 1 meets axis 2 or is parallel to
/// it, it falls apart into equations that are linear in one sine and cosine each, solved as such because the
/// quartic is ill-conditioned there.
class ThreeJointPosition {
 public:
  ThreeJointPosition() = default;
  /// Uses lines 0..2 of `axes`. `point` in the world, with all joints at zero.
  ThreeJointPosition(const ScrewAxes& axes, const Vector3& point);

  /// False where every configuration is singular (all three axes parallel, or two in one line): not solved
  /// here.
  [[nodiscard]] bool solvable() const { return shape_ != Shape::singular; }

  /// All solutions; near the border of the reach solutions may miss the target by about 1e-8 of the
  /// characteristic length, to be polished or refused by the caller. False if the third joint is free, which
  /// is left to a search.
  [[nodiscard]] bool solve(const Vector3& target, std::vector<ThreeAngles>& out) const;

 private:
  enum class Shape { singular, elbow_parallel, shoulder_meets, shoulder_parallel, general };

  bool solve_elbow_parallel(const Vector3& target, std::vector<ThreeAngles>& out) const;
  bool solve_third_first(const Vector3& target, std::vector<ThreeAngles>& out) const;
  void finish(const Vector3& target, double q3, std::vector<ThreeAngles>& out) const;

  Shape shape_ = Shape::singular;
  std::array<AxisLine, 3> lines_;
  Vector3 point_ = Vector3::Zero();
  double length_ = 1;
  CommonNormal shoulder_;  // axis 1 to axis 2
  // The point turned about axis 3: centre_ + cos q3 across_ + sin q3 aside_, and the frame (x_, y_, z2) at
  // axis 2's foot.
  Vector3 centre_ = Vector3::Zero(), across_ = Vector3::Zero(), aside_ = Vector3::Zero();
  Vector3 x_ = Vector3::Zero(), y_ = Vector3::Zero();
};

}  // namespace pathvet::detail
