#pragma once

#include <kdl/chain.hpp>
#include <kdl/chainfksolverpos_recursive.hpp>
#include <kdl/chainjnttojacsolver.hpp>
#include <memory>
#include <optional>
#include <vector>

#include "pathvet/model/path.hpp"

namespace pathvet::test {

using Column = Eigen::VectorXd;

/// A pose on its way, with its derivative by the fraction: mm and rad, world.
struct MovingTarget {
  Pose pose;
  Vector3 velocity = Vector3::Zero();
  Vector3 spin = Vector3::Zero();
};

/// An arm with a tool as Orocos KDL sees it, and plain Newton on top. Shares the model's structs with pathvet
/// and nothing else. Joint values are natural (rad, mm); rates and errors are scaled by the characteristic
/// length.
class ReferenceArm {
 public:
  ReferenceArm(const Arm& arm, const Pose& tool, Orientation orientation);

  [[nodiscard]] Eigen::Index joints() const { return scale_.size(); }
  /// Natural = scale * scaled.
  [[nodiscard]] const Column& scale() const { return scale_; }
  [[nodiscard]] double length() const { return length_; }
  [[nodiscard]] const Arm& model() const { return *arm_; }

  [[nodiscard]] Pose forward(const Column& q) const;
  /// Scaled Jacobian of the bound rows; `rotation` gives the tool's x and y where its z direction alone
  /// binds.
  [[nodiscard]] Eigen::MatrixXd jacobian(const Column& q, const Matrix3& rotation) const;
  [[nodiscard]] double smallest_singular_value(const Column& q) const;
  /// Scaled error of the bound rows.
  [[nodiscard]] Column error(const Pose& target, const Column& q) const;
  /// What is missed: mm and rad (of what binds).
  [[nodiscard]] std::pair<double, double> miss(const Pose& target, const Column& q) const;
  /// Newton until it stands still. False where it doesn't or the pose isn't met.
  [[nodiscard]] bool solve(const Pose& target, Column& q, double largest_change = 0.3) const;
  /// Natural joint rates by the fraction.
  [[nodiscard]] Column rate(const MovingTarget& target, const Column& q) const;
  /// Solutions of a pose from random seeds, by damped least squares; each modulo whole turns.
  [[nodiscard]] std::vector<Column> solutions(const Pose& target, int seeds) const;

  /// The scaled bound rows of a twist.
  [[nodiscard]] Column bind(const Matrix3& rotation, const Vector3& linear, const Vector3& angular) const;

 private:
  const Arm* arm_;
  Orientation orientation_;
  double length_;
  Column scale_;
  std::shared_ptr<KDL::Chain> chain_;
  std::shared_ptr<KDL::ChainFkSolverPos_recursive> forward_;
  std::shared_ptr<KDL::ChainJntToJacSolver> jacobian_;
};

/// |to - from| over the speed limit, the greatest of the joints: s.
[[nodiscard]] double least_time(const Arm& arm, const Column& from, const Column& to);

}  // namespace pathvet::test
