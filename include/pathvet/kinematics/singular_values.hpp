#pragma once

#include "pathvet/kinematics/chain.hpp"
#include "pathvet/model/path.hpp"

namespace pathvet {

/// The scaled Jacobian's bound rows: all six, position and two directions across the tool's z axis, or position alone.
[[nodiscard]] Eigen::Matrix<double, Eigen::Dynamic, Eigen::Dynamic, 0, 6, max_joints> bound_jacobian(
    const Chain& chain, const JointVector& q, Orientation orientation);

/// The smallest of the min(rows, joints) singular values of bound_jacobian, by an SVD: exact to rounding, at 0 too.
[[nodiscard]] double smallest_singular_value(const Chain& chain, const JointVector& q, Orientation orientation);

/// The smallest singular value with its vectors.
struct SingularDirection {
  double value = 0;
  JointVector joints;                  ///< right singular vector; scaled joints, unit length
  Vector6 motion = Vector6::Zero();    ///< left singular vector in the world, unbound directions zero; unit length
};
[[nodiscard]] SingularDirection smallest_singular_direction(const Chain& chain, const JointVector& q,
                                                            Orientation orientation);

}  // namespace pathvet
