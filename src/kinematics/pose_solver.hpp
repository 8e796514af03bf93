#pragma once

#include "pathvet/kinematics/chain.hpp"
#include "pathvet/model/path.hpp"

namespace pathvet::detail {

/// How far a configuration misses a pose, as far as the orientation binds.
struct Miss {
  double position = 0;  ///< over the characteristic length
  double rotation = 0;  ///< rad

  [[nodiscard]] double squared() const { return position * position + rotation * rotation; }
  [[nodiscard]] bool within(double position_limit, double rotation_limit) const {
    return position <= position_limit && rotation <= rotation_limit;
  }
};

/// Levenberg-Marquardt on the scaled pose error of one chain: damped least squares whose damping fades with
/// the error (after Sugihara 2011), so that what it converges to is exact. Works for any number of joints and
/// rows.
class PoseSolver {
 public:
  PoseSolver(const Chain& chain, Orientation orientation) : chain_(&chain), orientation_(orientation) {}

  /// Moves `q` to a nearby configuration that meets the pose, or to a local least of the error. Ends when the
  /// error is at the rounding, or no longer falls, or after `most_steps` evaluations.
  Miss solve(const Pose& target, JointVector& q, int most_steps) const;

  [[nodiscard]] Miss miss(const Pose& target, const JointVector& q) const;

  /// Rank of the scaled Jacobian of the bound directions at `q`, which meets the pose.
  [[nodiscard]] int rank(const Pose& target, const JointVector& q) const;

 private:
  template <int N>
  [[nodiscard]] Miss miss_sized(const Pose& target, const JointVector& q) const;
  template <int N>
  Miss solve_sized(const Pose& target, JointVector& q, int most_steps) const;

  const Chain* chain_;
  Orientation orientation_;
};

/// Number of rows of the Jacobian that an orientation binds: 6, 5 or 3.
[[nodiscard]] int bound_rows(Orientation orientation);

}  // namespace pathvet::detail
