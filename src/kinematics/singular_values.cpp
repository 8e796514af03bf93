#include "pathvet/kinematics/singular_values.hpp"

#include <Eigen/SVD>

namespace pathvet {
namespace {

using BoundJacobian = Eigen::Matrix<double, Eigen::Dynamic, Eigen::Dynamic, 0, 6, max_joints>;

}  // namespace

BoundJacobian bound_jacobian(const Chain& chain, const JointVector& q, Orientation orientation) {
  ChainState<Eigen::Dynamic> state;
  chain.evaluate<Eigen::Dynamic>(q, state);
  Jacobian full;
  chain.scaled_jacobian<Eigen::Dynamic>(state, full);
  if (orientation == Orientation::full) return full;
  if (orientation == Orientation::free) return full.topRows<3>();
  BoundJacobian out(5, full.cols());
  out.topRows<3>() = full.topRows<3>();
  out.bottomRows<2>() = state.tcp.rotation.leftCols<2>().transpose() * full.bottomRows<3>();
  return out;
}

double smallest_singular_value(const Chain& chain, const JointVector& q, Orientation orientation) {
  if (orientation == Orientation::full && chain.joint_count() == 6) {
    ChainState<6> state;
    chain.evaluate<6>(q, state);
    JacobianMatrix<6> jacobian;
    chain.scaled_jacobian<6>(state, jacobian);
    return Eigen::JacobiSVD<JacobianMatrix<6>>(jacobian).singularValues()[5];
  }
  const BoundJacobian jacobian = bound_jacobian(chain, q, orientation);
  const Eigen::JacobiSVD<BoundJacobian> svd(jacobian);
  return svd.singularValues()[svd.singularValues().size() - 1];
}

SingularDirection smallest_singular_direction(const Chain& chain, const JointVector& q,
                                              Orientation orientation) {
  const BoundJacobian jacobian = bound_jacobian(chain, q, orientation);
  const Eigen::JacobiSVD<BoundJacobian> svd(jacobian, Eigen::ComputeThinU | Eigen::ComputeThinV);
  const auto last = svd.singularValues().size() - 1;
  SingularDirection out;
  out.value = svd.singularValues()[last];
  out.joints = svd.matrixV().col(last);
  out.motion.head<3>() = svd.matrixU().col(last).head<3>();
  if (orientation == Orientation::full) out.motion.tail<3>() = svd.matrixU().col(last).tail<3>();
  if (orientation == Orientation::axis)
    out.motion.tail<3>() = chain.forward(q).rotation.leftCols<2>() * svd.matrixU().col(last).tail<2>();
  Eigen::Index largest = 0;
  out.joints.cwiseAbs().maxCoeff(&largest);
  if (out.joints[largest] < 0) {
    out.joints = -out.joints;
    out.motion = -out.motion;
  }
  return out;
}

}  // namespace pathvet
