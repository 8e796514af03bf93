#pragma once

#include "pathvet/kinematics/chain.hpp"
#include "pathvet/motion/segment_motion.hpp"

namespace pathvet {

/// Rows of the task: 6 where the whole pose binds, fewer where the orientation is freer.
template <int N>
inline constexpr int task_rows = N == 6 ? 6 : Eigen::Dynamic;
template <int N>
using TaskColumn = Eigen::Matrix<double, task_rows<N>, 1, 0, 6, 1>;
template <int N>
using TaskJacobian = Eigen::Matrix<double, task_rows<N>, N, 0, 6, bounded<N>>;
template <int N>
using TaskInverse = Eigen::Matrix<double, N, task_rows<N>, 0, bounded<N>, 6>;

/// How strongly the scaled Jacobian bends: bounds on its first and second derivative by the scaled joints
/// (Frobenius norms of the tensors), valid in the ball of radius `radius` round the configuration they were
/// taken at.
struct Bend {
  /// The radius that the bounds below hold for; steps are kept inside it. A larger one would loosen them.
  static constexpr double radius = 0.02;
  double first = 0;
  double second = 0;
};

/// Everything about one configuration against one target. Joints are in natural units (`q`) and, where the
/// name says scaled, in units that make them free of dimension: prismatic values over the characteristic
/// length.
template <int N>
struct TaskState {
  double fraction = 0;
  JointColumn<N> q;
  CurvePoint target;
  ChainState<N> chain;
  TaskColumn<N> error;       ///< scaled: position over the characteristic length, rotation vector in rad
  TaskJacobian<N> jacobian;  ///< scaled, bound rows only
  TaskInverse<N> inverse;    ///< (pseudo-)inverse of it
  double inverse_norm = 0;   ///< Frobenius norm: 1 / inverse_norm <= smallest singular value
  JointColumn<N> rate;       ///< scaled joints by fraction
  JointColumn<N> rate_rate;
  Bend bend;
};

/// A chain that has to follow a Cartesian segment: pose error, Jacobian of the bound directions, and the
/// exact first and second derivatives of the joints along the path. N = 6 is the fixed-size case of six
/// joints with the full pose.
template <int N>
class Task {
 public:
  Task(const Arm& arm, const Chain& chain, const SegmentMotion& motion, Orientation orientation);

  [[nodiscard]] int joints() const { return N == Eigen::Dynamic ? chain_.joint_count() : N; }
  [[nodiscard]] int rows() const { return rows_; }
  [[nodiscard]] const Chain& chain() const { return chain_; }
  [[nodiscard]] const SegmentMotion& motion() const { return motion_; }
  [[nodiscard]] Orientation orientation() const { return orientation_; }
  /// Natural = scale * scaled, joint by joint.
  [[nodiscard]] const JointColumn<N>& scale() const { return scale_; }

  /// Fills target, chain, error and jacobian for state.q at state.fraction.
  void evaluate(int piece, TaskState<N>& state) const;
  /// Fills inverse and inverse_norm. False where the Jacobian has no full rank in double precision.
  [[nodiscard]] bool invert(TaskState<N>& state) const;
  /// Fills rate and rate_rate from the inverse: the exact derivatives of the joints by the fraction
  /// (redundant arms: with the null-space motion of `preference`, whose second derivative is taken by
  /// differences).
  void derivatives(int piece, TaskState<N>& state) const;
  void bound_bend(TaskState<N>& state) const;

  /// The target's derivatives in the bound rows, scaled.
  [[nodiscard]] TaskColumn<N> target_rate(const TaskState<N>& state) const;
  /// Scaled bound rows of (J' rate - x''), the part of the second derivative that rate_rate must cancel;
  /// `rate` scaled joints and `speed` the fraction's rate, both by the curve's own parameter.
  [[nodiscard]] TaskColumn<N> second_order(const TaskState<N>& state, const JointColumn<N>& rate,
                                           double speed) const;
  /// Bounds on the norm of the scaled second and third derivative of the target by the fraction.
  [[nodiscard]] double target_second(int piece) const;
  [[nodiscard]] double target_third(int piece) const;

 private:
  [[nodiscard]] TaskColumn<N> bind(const TaskState<N>& state, const Vector6& twist) const;
  void first_derivative(TaskState<N>& state) const;
  [[nodiscard]] JointColumn<N> preference(const TaskState<N>& state) const;

  const Arm& arm_;
  const Chain& chain_;
  const SegmentMotion& motion_;
  Orientation orientation_;
  int rows_;
  JointColumn<N> scale_;
};

}  // namespace pathvet
