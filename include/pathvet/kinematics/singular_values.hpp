#pragma once

#include <optional>

#include "pathvet/kinematics/chain.hpp"
#include "pathvet/model/path.hpp"

namespace pathvet {

/// The scaled Jacobian's bound rows: all six, position and two directions across the tool's z axis, or
/// position alone.
[[nodiscard]] Eigen::Matrix<double, Eigen::Dynamic, Eigen::Dynamic, 0, 6, max_joints> bound_jacobian(
    const Chain& chain, const JointVector& q, Orientation orientation);

/// The smallest of the min(rows, joints) singular values of bound_jacobian, exact to rounding (about 1e-15 of
/// the largest, so at 0 too): by repeated squaring of (J J^T)^-1 with a two-sided bound for six joints away
/// from singularities, by an SVD otherwise.
[[nodiscard]] double smallest_singular_value(const Chain& chain, const JointVector& q,
                                             Orientation orientation);

/// The same from the inverse of a 6 x 6 scaled Jacobian, by repeated squaring; none where the inverse has
/// lost too many digits for that (smallest singular value below 1e-4).
[[nodiscard]] std::optional<double> smallest_singular_value(const Eigen::Matrix<double, 6, 6>& inverse);

/// Lower bound of the smallest singular value from the matrix' inverse W: (sum of sigma^-4)^(-1/4), that is
/// ||W^T W||_F^(-1/2); at most a factor 6^(1/4) below it, and close where the second smallest is well apart.
[[nodiscard]] double smallest_singular_low(const Eigen::Matrix<double, 6, 6>& inverse);

/// The smallest singular value with its vectors.
struct SingularDirection {
  double value = 0;
  JointVector joints;  ///< right singular vector; scaled joints, unit length
  Vector6 motion =
      Vector6::Zero();  ///< left singular vector in the world, unbound directions zero; unit length
};
[[nodiscard]] SingularDirection smallest_singular_direction(const Chain& chain, const JointVector& q,
                                                            Orientation orientation);

}  // namespace pathvet
