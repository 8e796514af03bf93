#include "pathvet/kinematics/chain.hpp"

#include <cmath>

namespace pathvet {

Chain::Chain(const Arm& arm, const Pose& tool)
    : joint_count_(arm.joint_count()), characteristic_length_(arm.characteristic_length) {
  Pose pending = arm.base;
  for (std::size_t i = 0; i < arm.joints.size(); ++i) {
    fixed_[i] = pending * arm.joints[i].before;
    revolute_[i] = arm.joints[i].type == JointType::revolute;
    pending = arm.joints[i].after;
  }
  fixed_[arm.joints.size()] = pending * arm.flange * tool;
}

template <int N>
void Chain::evaluate(const JointColumn<N>& q, ChainState<N>& state) const {
  state.resize(joint_count_);
  const int n = N == Eigen::Dynamic ? joint_count_ : N;
  Matrix3 rotation = fixed_[0].rotation;
  Vector3 position = fixed_[0].position;
  for (int i = 0; i < n; ++i) {
    state.axes.col(i) = rotation.col(2);
    state.levers.col(i) = position;
    const Pose& next = fixed_[static_cast<std::size_t>(i) + 1];
    if (revolute_[static_cast<std::size_t>(i)]) {
      const double c = std::cos(q[i]);
      const double s = std::sin(q[i]);
      const Vector3 x = c * rotation.col(0) + s * rotation.col(1);
      rotation.col(1) = c * rotation.col(1) - s * rotation.col(0);
      rotation.col(0) = x;
    } else {
      position += q[i] * rotation.col(2);
    }
    position.noalias() += rotation * next.position;
    rotation = rotation * next.rotation;
  }
  state.tcp.rotation = rotation;
  state.tcp.position = position;
  for (int i = 0; i < n; ++i) state.levers.col(i) = position - state.levers.col(i);
}

template <int N>
void Chain::jacobian(const ChainState<N>& state, JacobianMatrix<N>& out) const {
  const int n = N == Eigen::Dynamic ? joint_count_ : N;
  if constexpr (N == Eigen::Dynamic) out.resize(6, n);
  for (int i = 0; i < n; ++i) {
    const Vector3 axis = state.axes.col(i);
    if (revolute_[static_cast<std::size_t>(i)]) {
      out.col(i).template head<3>() = axis.cross(state.levers.col(i));
      out.col(i).template tail<3>() = axis;
    } else {
      out.col(i).template head<3>() = axis;
      out.col(i).template tail<3>().setZero();
    }
  }
}

template <int N>
void Chain::scaled_jacobian(const ChainState<N>& state, JacobianMatrix<N>& out) const {
  const int n = N == Eigen::Dynamic ? joint_count_ : N;
  if constexpr (N == Eigen::Dynamic) out.resize(6, n);
  const double scale = 1.0 / characteristic_length_;
  for (int i = 0; i < n; ++i) {
    const Vector3 axis = state.axes.col(i);
    if (revolute_[static_cast<std::size_t>(i)]) {
      out.col(i).template head<3>() = axis.cross(scale * state.levers.col(i));
      out.col(i).template tail<3>() = axis;
    } else {
      out.col(i).template head<3>() = axis;
      out.col(i).template tail<3>().setZero();
    }
  }
}

template <int N>
Vector6 Chain::bias(const ChainState<N>& state, const JointColumn<N>& rates) const {
  // Column j turns with the joints before it (angular velocity `spin`), and its lever changes by the TCP's
  // velocity less that of the joint's origin. Prismatic joints before j move its origin along, so v_tcp -
  // v_origin is summed from the joints at and behind j.
  const int n = N == Eigen::Dynamic ? joint_count_ : N;
  AxisColumns<N> spins;
  if constexpr (N == Eigen::Dynamic) spins.resize(3, n);
  Vector3 spin = Vector3::Zero();
  for (int j = 0; j < n; ++j) {
    spins.col(j) = spin;
    if (revolute_[static_cast<std::size_t>(j)]) spin += rates[j] * state.axes.col(j);
  }
  Vector3 linear = Vector3::Zero();
  Vector3 angular = Vector3::Zero();
  Vector3 relative =
      Vector3::Zero();  // velocity of the TCP against the origin of joint j, less the spin before j
  for (int j = n - 1; j >= 0; --j) {
    const Vector3 axis = state.axes.col(j);
    const Vector3 lever = state.levers.col(j);
    const Vector3 turning = Vector3(spins.col(j)).cross(axis);
    if (revolute_[static_cast<std::size_t>(j)]) {
      relative += rates[j] * axis.cross(lever);
      const Vector3 lever_rate = relative + Vector3(spins.col(j)).cross(lever);
      linear += rates[j] * (turning.cross(lever) + axis.cross(lever_rate));
      angular += rates[j] * turning;
    } else {
      relative += rates[j] * axis;
      linear += rates[j] * turning;
    }
  }
  Vector6 out;
  out << linear, angular;
  return out;
}

Pose Chain::forward(const JointVector& q) const {
  ChainState<Eigen::Dynamic> state;
  evaluate<Eigen::Dynamic>(q, state);
  return state.tcp;
}

Jacobian Chain::jacobian(const JointVector& q) const {
  ChainState<Eigen::Dynamic> state;
  evaluate<Eigen::Dynamic>(q, state);
  Jacobian out;
  jacobian<Eigen::Dynamic>(state, out);
  return out;
}

Jacobian Chain::scaled_jacobian(const JointVector& q) const {
  ChainState<Eigen::Dynamic> state;
  evaluate<Eigen::Dynamic>(q, state);
  Jacobian out;
  scaled_jacobian<Eigen::Dynamic>(state, out);
  return out;
}

Eigen::Matrix<double, 3, Eigen::Dynamic, 0, 3, max_joints + 2> Chain::skeleton(const JointVector& q) const {
  ChainState<Eigen::Dynamic> state;
  evaluate<Eigen::Dynamic>(q, state);
  Eigen::Matrix<double, 3, Eigen::Dynamic, 0, 3, max_joints + 2> points(3, joint_count_ + 2);
  points.col(0) = fixed_[0].position;
  for (int i = 0; i < joint_count_; ++i) points.col(i + 1) = state.tcp.position - state.levers.col(i);
  points.col(joint_count_ + 1) = state.tcp.position;
  return points;
}

template void Chain::evaluate<6>(const JointColumn<6>&, ChainState<6>&) const;
template void Chain::evaluate<Eigen::Dynamic>(const JointVector&, ChainState<Eigen::Dynamic>&) const;
template void Chain::jacobian<6>(const ChainState<6>&, JacobianMatrix<6>&) const;
template void Chain::jacobian<Eigen::Dynamic>(const ChainState<Eigen::Dynamic>&, Jacobian&) const;
template void Chain::scaled_jacobian<6>(const ChainState<6>&, JacobianMatrix<6>&) const;
template void Chain::scaled_jacobian<Eigen::Dynamic>(const ChainState<Eigen::Dynamic>&, Jacobian&) const;
template Vector6 Chain::bias<6>(const ChainState<6>&, const JointColumn<6>&) const;
template Vector6 Chain::bias<Eigen::Dynamic>(const ChainState<Eigen::Dynamic>&, const JointVector&) const;

}  // namespace pathvet
