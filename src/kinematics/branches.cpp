#include "pathvet/kinematics/branches.hpp"

#include <Eigen/LU>
#include <cmath>

#include "kinematics/multi_start.hpp"
#include "kinematics/pose_solver.hpp"
#include "kinematics/screw_axes.hpp"

namespace pathvet {

namespace {

/// The determinant over the product of the factors may vary by this share.
constexpr double constant_share = 1e-9;
constexpr int confirmations = 16;
/// Configurations where the product is smaller than this are too near a singularity to say anything.
constexpr double generic_product = 1e-5;

template <int N>
Vector3 origin(const ChainState<N>& state, int joint) {
  return state.tcp.position - state.levers.col(joint);
}

}  // namespace

BranchAnalysis::BranchAnalysis(const Arm& arm, Orientation orientation, const Pose& tool)
    : orientation_(orientation), chain_(arm, tool) {
  if (arm.joint_count() != detail::bound_rows(orientation)) return;
  kind_ = Kind::determinant;
  if (detect_shape() && confirmed()) kind_ = Kind::factored;
}

int BranchAnalysis::count() const {
  switch (kind_) {
    case Kind::none:
      return 0;
    case Kind::determinant:
      return 1;
    case Kind::factored:
      break;
  }
  return 3;
}

bool BranchAnalysis::detect_shape() {
  if (chain_.joint_count() != 6) return false;
  for (int i = 0; i < 6; ++i) {
    if (!chain_.is_revolute(i)) return false;
  }
  const detail::ScrewAxes axes(chain_);
  if (!axes.parallel(1, 2) || axes.parallel(0, 1) || !axes.meet(4, 5)) return false;
  const Vector3 centre = detail::common_normal(axes[5], axes[4]).foot_first;
  const Vector3 other = detail::common_normal(axes[4], axes[3]).foot_first;
  if (axes.meet(3, 4) && (other - centre).norm() <= detail::geometry_tolerance * axes.length) {
    shape_ = Shape::spherical_wrist;
    const detail::CommonNormal forearm = detail::common_normal(axes[2], axes[3]);
    const Vector3 across = axes[2].direction.cross(axes[3].direction);
    const Vector3 apart = forearm.foot_second - forearm.foot_first;
    const bool meets = forearm.distance <= detail::geometry_tolerance * axes.length;
    elbow_sign_ = meets || across.dot(apart) >= 0 ? -1.0 : 1.0;
  } else if (axes.parallel(2, 3)) {
    shape_ = Shape::three_parallel;
  } else {
    return false;
  }
  const detail::CommonNormal shoulder = detail::common_normal(axes[0], axes[1]);
  shoulder_apart_ = shoulder.distance > detail::geometry_tolerance * axes.length;
  shoulder_foot_1_ = axes[0].direction.dot(shoulder.foot_first - axes[0].point);
  shoulder_foot_2_ = axes[1].direction.dot(shoulder.foot_second - axes[1].point);
  wrist_place_ = axes[5].direction.dot(centre - axes[5].point);
  return true;
}

bool BranchAnalysis::confirmed() const {
  const detail::SpreadPoints points(6);
  double constant = 0;
  int checked = 0;
  for (int i = 1; checked < confirmations; ++i) {
    if (i > 64 * confirmations) return false;
    const JointVector q = 6.28 * points.point(i);
    const std::array<double, 3> f = geometric_factors(q);
    const double product = f[0] * f[1] * f[2];
    if (std::abs(product) < generic_product) continue;
    const double ratio = determinant<6>(q) / product;
    if (checked++ == 0) constant = ratio;
    if (!(std::abs(ratio - constant) <= constant_share * std::abs(constant)) || constant == 0) return false;
  }
  return true;
}

template <int N>
double BranchAnalysis::determinant(const JointColumn<N>& q) const {
  ChainState<N> state;
  chain_.evaluate<N>(q, state);
  JacobianMatrix<N> jacobian;
  chain_.scaled_jacobian<N>(state, jacobian);
  if constexpr (N == 6) {
    return Eigen::Matrix<double, 6, 6>(jacobian).determinant();
  } else {
    const int n = chain_.joint_count();
    Eigen::Matrix<double, Eigen::Dynamic, Eigen::Dynamic, 0, 6, 6> bound(n, n);
    bound.topRows(3) = jacobian.topRows(3);
    if (orientation_ == Orientation::full) bound.bottomRows(3) = jacobian.bottomRows(3);
    if (orientation_ == Orientation::axis) {
      bound.bottomRows(2) = state.tcp.rotation.template leftCols<2>().transpose() * jacobian.bottomRows(3);
    }
    return bound.determinant();
  }
}

std::array<double, 3> BranchAnalysis::geometric_factors(const JointVector& q) const {
  ChainState<6> state;
  chain_.evaluate<6>(q, state);
  const double length = chain_.characteristic_length();
  const auto axis = [&](int i) -> Vector3 { return state.axes.col(i); };
  const Vector3 centre = origin(state, 5) + wrist_place_ * axis(5);
  const Vector3 foot = origin(state, 0) + shoulder_foot_1_ * axis(0);
  const Vector3 normal = shoulder_apart_ ? Vector3(origin(state, 1) + shoulder_foot_2_ * axis(1) - foot)
                                         : axis(0).cross(axis(1));
  const Vector3 upper = origin(state, 2) - origin(state, 1);
  const Vector3 forearm = (shape_ == Shape::spherical_wrist ? centre : origin(state, 3)) - origin(state, 2);
  const double elbow = axis(2).dot(upper.cross(forearm)) / (length * length);
  return {normal.dot(centre - foot) / (normal.norm() * length),
          shape_ == Shape::spherical_wrist ? elbow_sign_ * elbow : elbow,
          axis(4).dot(axis(3).cross(axis(5)))};
}

std::array<double, 3> BranchAnalysis::factors(const JointVector& q) const {
  switch (kind_) {
    case Kind::none:
      return {};
    case Kind::determinant:
      return {chain_.joint_count() == 6 ? determinant<6>(q) : determinant<Eigen::Dynamic>(q), 0, 0};
    case Kind::factored:
      break;
  }
  return geometric_factors(q);
}

std::string BranchAnalysis::signs(const JointVector& q) const {
  const std::array<double, 3> values = factors(q);
  std::string out;
  for (int i = 0; i < count(); ++i) out += values[static_cast<std::size_t>(i)] < 0 ? '-' : '+';
  return out;
}

}  // namespace pathvet
