#include "kinematics/special_six.hpp"

namespace pathvet::detail {

std::optional<SphericalWrist> SphericalWrist::detect(const ScrewAxes& axes) {
  if (!axes.meet(3, 4) || !axes.meet(4, 5)) return std::nullopt;
  const Vector3 centre = common_normal(axes[4], axes[3]).foot_first;
  if ((common_normal(axes[4], axes[5]).foot_first - centre).norm() > geometry_tolerance * axes.length) {
    return std::nullopt;
  }
  SphericalWrist out;
  for (int i = 0; i < 6; ++i) out.lines_[static_cast<std::size_t>(i)] = axes[i];
  out.centre_ = centre;
  out.position_ = ThreeJointPosition(axes, centre);
  if (!out.position_.solvable()) return std::nullopt;
  out.wrist_ = WristTurns(axes[3].direction, axes[4].direction, axes[5].direction);
  return out;
}

bool SphericalWrist::solve(const Pose& motion, std::vector<SixAngles>& out) const {
  out.clear();
  std::vector<ThreeAngles> arms;
  arms.reserve(8);
  const bool all = position_.solve(motion * centre_, arms);
  for (const ThreeAngles& arm : arms) {
    Matrix3 rotation = motion.rotation;
    for (std::size_t i = 0; i < 3; ++i) {
      for (int k = 0; k < 3; ++k) {
        rotation.col(k) = turned(rotation.col(k), lines_[i].direction, -arm.q[i]);
      }
    }
    for (const WristTurns::Turns& turns : wrist_.solve(rotation)) {
      out.push_back({{arm.q[0], arm.q[1], arm.q[2], turns.q4, turns.q5, turns.q6}, arm.free || turns.free});
    }
  }
  return all;
}

}  // namespace pathvet::detail
