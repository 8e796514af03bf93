#include "pathvet/kinematics/singular_values.hpp"

#include <Eigen/SVD>
#include <cmath>
#include <optional>

#include "pathvet/kinematics/small_inverse.hpp"

namespace pathvet {
namespace {

using BoundJacobian = Eigen::Matrix<double, Eigen::Dynamic, Eigen::Dynamic, 0, 6, max_joints>;
using Matrix66 = Eigen::Matrix<double, 6, 6>;

/// W^T W; the copy lets the product run down columns, which vectorises.
Matrix66 gram_of(const Matrix66& w) {
  const Matrix66 transposed = w.transpose();
  return transposed.lazyProduct(w);
}

/// The inverse loses digits by the condition number; below this its smallest singular value is left to the
/// SVD.
constexpr double trusted = 1e-4;
constexpr double agreement = 1e-13;  // relative, of the two-sided bound
constexpr int most_squarings = 11;

/// The greatest eigenvalue g of W^T W lies between a Rayleigh quotient and the 2^k-th root of the Frobenius
/// norm of the 2^k-th power; squaring the matrix brings the two together however near the next eigenvalue is.
std::optional<double> by_squaring(const Matrix66& inverse) {
  const Matrix66 gram = gram_of(inverse);
  const double norm = gram.norm();
  if (!(norm < 1.0 / (trusted * trusted))) return std::nullopt;
  Matrix66 power = gram / norm;
  double log_scale = 0;  // of power^(1 / 2^k), in terms of gram / norm
  double exponent = 1;
  for (int k = 0; k < most_squarings; ++k) {
    const Matrix66 square = power.lazyProduct(power);
    power = square;
    const double size = power.norm();
    power /= size;
    exponent *= 2;
    log_scale += std::log(size) / exponent;
    if (k < 2) continue;
    Eigen::Index column = 0;
    power.diagonal().maxCoeff(&column);
    const Vector6 x = power.col(column);
    const double low = x.dot(gram * x) / x.squaredNorm();
    const double high = norm * std::exp(log_scale);
    if (high - low <= agreement * high) return 1.0 / std::sqrt(low);
  }
  return std::nullopt;
}

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

std::optional<double> smallest_singular_value(const Matrix66& inverse) {
  return by_squaring(inverse);
}

double smallest_singular_low(const Matrix66& inverse) {
  const Matrix66 gram = gram_of(inverse);
  return 1.0 / std::sqrt(gram.norm());
}

double smallest_singular_value(const Chain& chain, const JointVector& q, Orientation orientation) {
  if (orientation == Orientation::full && chain.joint_count() == 6) {
    ChainState<6> state;
    chain.evaluate<6>(q, state);
    JacobianMatrix<6> jacobian;
    chain.scaled_jacobian<6>(state, jacobian);
    Matrix66 inverse;
    if (small_inverse<6>(jacobian, inverse)) {
      if (const auto value = by_squaring(inverse)) return *value;
    }
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
