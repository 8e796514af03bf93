#pragma once

#include <array>

#include "pathvet/model/arm.hpp"

namespace pathvet {

/// Columns of `N` joints; `Eigen::Dynamic` means "any number up to max_joints", without heap.
template <int N>
inline constexpr int bounded = N == Eigen::Dynamic ? max_joints : N;
template <int N>
using JointColumn = Eigen::Matrix<double, N, 1, 0, bounded<N>, 1>;
template <int N>
using AxisColumns = Eigen::Matrix<double, 3, N, 0, 3, bounded<N>>;
template <int N>
using JacobianMatrix = Eigen::Matrix<double, 6, N, 0, 6, bounded<N>>;
using Jacobian = JacobianMatrix<Eigen::Dynamic>;

/// Everything that one forward pass through the chain yields, in the world frame. Lengths in mm.
template <int N>
struct ChainState {
  Pose tcp;
  AxisColumns<N> axes;    ///< unit direction of each joint's axis
  AxisColumns<N> levers;  ///< from a point of each axis (the joint's origin) to the TCP, mm

  void resize(int joints) {
    if constexpr (N == Eigen::Dynamic) {
      axes.resize(3, joints);
      levers.resize(3, joints);
    }
  }
};

/// An arm with a tool on its flange, made ready for the forward map: the fixed placements between the motions
/// are merged, so that the TCP's pose is fixed[0] M(q_0) fixed[1] M(q_1) ... fixed[n], each M about or along
/// z. Const after construction; safe to share between threads.
class Chain {
 public:
  explicit Chain(const Arm& arm, const Pose& tool = {});

  [[nodiscard]] int joint_count() const { return joint_count_; }
  [[nodiscard]] bool is_revolute(int joint) const { return revolute_[static_cast<std::size_t>(joint)]; }
  /// mm; divides the translational rows of the scaled Jacobian (contract: scaled Jacobian).
  [[nodiscard]] double characteristic_length() const { return characteristic_length_; }

  /// The forward map. q: joint_count() values in rad or mm. Accuracy: a few ulp of the arm's reach.
  template <int N>
  void evaluate(const JointColumn<N>& q, ChainState<N>& state) const;

  /// Jacobian, 6 x n: world frame, at the TCP, linear rows (mm) over angular rows; per rad or per mm.
  template <int N>
  void jacobian(const ChainState<N>& state, JacobianMatrix<N>& out) const;

  /// The scaled Jacobian, free of units: linear rows divided by the characteristic length and, so that a
  /// prismatic joint counts in the same measure, prismatic columns multiplied by it. Its singular values are
  /// what the report calls singular values.
  template <int N>
  void scaled_jacobian(const ChainState<N>& state, JacobianMatrix<N>& out) const;

  /// (d/ds J) q' for q' = `rates` (natural units): what the TCP accelerates by when the joints don't. mm,
  /// rad.
  template <int N>
  [[nodiscard]] Vector6 bias(const ChainState<N>& state, const JointColumn<N>& rates) const;

  /// The forward map alone: pose of the TCP in the world.
  [[nodiscard]] Pose forward(const JointVector& q) const;
  [[nodiscard]] Jacobian jacobian(const JointVector& q) const;
  [[nodiscard]] Jacobian scaled_jacobian(const JointVector& q) const;

  /// Positions (mm, world) of the base, every joint's origin and the TCP: the arm's skeleton, n + 2 points.
  [[nodiscard]] Eigen::Matrix<double, 3, Eigen::Dynamic, 0, 3, max_joints + 2> skeleton(
      const JointVector& q) const;

  [[nodiscard]] const Pose& fixed(int index) const { return fixed_[static_cast<std::size_t>(index)]; }

 private:
  int joint_count_ = 0;
  double characteristic_length_ = 1;
  std::array<bool, max_joints> revolute_{};
  std::array<Pose, max_joints + 1> fixed_{};
};

}  // namespace pathvet
