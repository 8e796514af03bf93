#include "pathvet/tracking/task.hpp"

#include <Eigen/Cholesky>
#include <Eigen/LU>
#include <cmath>

#include "pathvet/kinematics/small_inverse.hpp"

namespace pathvet {
namespace {

int bound_rows(Orientation orientation) {
  return orientation == Orientation::full ? 6 : orientation == Orientation::axis ? 5 : 3;
}

/// Rotation vector from `now` to `target` for errors far below a half turn; near zero the skew part is exact
/// to third order and needs no square root.
Vector3 rotation_error(const Matrix3& target, const Matrix3& now) {
  const Matrix3 r = target * now.transpose();
  const Vector3 skew(r(2, 1) - r(1, 2), r(0, 2) - r(2, 0), r(1, 0) - r(0, 1));
  const double sine = 0.5 * skew.norm();
  const double cosine = 0.5 * (r.trace() - 1.0);
  if (cosine < -0.9) return rotation_vector(r);
  // angle / sine; below 1e-4 rad the quotient is 1 + sine^2 / 6 to double precision
  const double factor = sine < 1e-4 ? 1.0 + sine * sine / 6.0 : std::atan2(sine, cosine) / sine;
  return 0.5 * factor * skew;
}

}  // namespace

template <int N>
Task<N>::Task(const Arm& arm, const Chain& chain, const SegmentMotion& motion, Orientation orientation)
    : arm_(arm), chain_(chain), motion_(motion), orientation_(orientation), rows_(bound_rows(orientation)) {
  if constexpr (N == Eigen::Dynamic) scale_.resize(chain.joint_count());
  for (int i = 0; i < joints(); ++i) scale_[i] = chain.is_revolute(i) ? 1.0 : chain.characteristic_length();
}

template <int N>
TaskColumn<N> Task<N>::bind(const TaskState<N>& state, const Vector6& twist) const {
  TaskColumn<N> out;
  if constexpr (N == 6) {
    out.template head<3>() = twist.head<3>() / chain_.characteristic_length();
    out.template tail<3>() = twist.tail<3>();
  } else {
    out.resize(rows_);
    out.template head<3>() = twist.head<3>() / chain_.characteristic_length();
    if (orientation_ == Orientation::full) out.template tail<3>() = twist.tail<3>();
    if (orientation_ == Orientation::axis) {
      out[3] = state.target.pose.rotation.col(0).dot(twist.tail<3>());
      out[4] = state.target.pose.rotation.col(1).dot(twist.tail<3>());
    }
  }
  return out;
}

template <int N>
void Task<N>::evaluate(int piece, TaskState<N>& state) const {
  motion_.at(piece, state.fraction, state.target);
  chain_.template evaluate<N>(state.q, state.chain);
  const Pose& tcp = state.chain.tcp;
  Vector6 error;
  error.head<3>() = state.target.pose.position - tcp.position;
  if (orientation_ == Orientation::axis) {
    const Vector3 now = tcp.rotation.col(2);
    const Vector3 wanted = state.target.pose.rotation.col(2);
    const Vector3 across = now.cross(wanted);
    const double sine = across.norm();
    const double angle = std::atan2(sine, now.dot(wanted));
    error.tail<3>() = sine > 0 ? Vector3(across * (angle / sine)) : Vector3::Zero();
  } else {
    error.tail<3>() = rotation_error(state.target.pose.rotation, tcp.rotation);
  }
  state.error = bind(state, error);
  if constexpr (N == 6) {
    chain_.template scaled_jacobian<6>(state.chain, state.jacobian);
  } else {
    Jacobian full;
    chain_.template scaled_jacobian<Eigen::Dynamic>(state.chain, full);
    state.jacobian.resize(rows_, joints());
    state.jacobian.template topRows<3>() = full.template topRows<3>();
    if (orientation_ == Orientation::full)
      state.jacobian.template bottomRows<3>() = full.template bottomRows<3>();
    if (orientation_ == Orientation::axis)
      state.jacobian.template bottomRows<2>() =
          state.target.pose.rotation.template leftCols<2>().transpose() * full.template bottomRows<3>();
  }
}

template <int N>
bool Task<N>::invert(TaskState<N>& state) const {
  if constexpr (N == 6) {
    if (!small_inverse<6>(state.jacobian, state.inverse)) return false;
  } else {
    using Square = Eigen::Matrix<double, Eigen::Dynamic, Eigen::Dynamic, 0, max_joints, max_joints>;
    const auto& j = state.jacobian;
    if (joints() == rows_) {
      state.inverse = Square(j).inverse();
    } else if (joints() < rows_) {
      state.inverse = Square(j.transpose() * j).llt().solve(j.transpose());
    } else {
      const Square gram = j * j.transpose();
      state.inverse = j.transpose() * gram.inverse();
    }
  }
  state.inverse_norm = state.inverse.norm();
  return std::isfinite(state.inverse_norm);
}

template <int N>
TaskColumn<N> Task<N>::target_rate(const TaskState<N>& state) const {
  return bind(state, state.target.first);
}

template <int N>
TaskColumn<N> Task<N>::second_order(const TaskState<N>& state, const JointColumn<N>& rate,
                                    double speed) const {
  const JointColumn<N> natural = scale_.cwiseProduct(rate);
  const Vector6 twist = chain_.template bias<N>(state.chain, natural) - speed * speed * state.target.second;
  TaskColumn<N> out = bind(state, twist);
  if constexpr (N != 6) {
    if (orientation_ == Orientation::axis) {
      // The two bound rows turn with the target, while the tool may spin about its own axis against it.
      const Matrix3& r = state.target.pose.rotation;
      Jacobian full;
      chain_.template scaled_jacobian<Eigen::Dynamic>(state.chain, full);
      const Vector3 spin = full.template bottomRows<3>() * rate;
      const Vector3 turning = speed * state.target.first.template tail<3>();
      const double slip = (spin - turning).dot(r.col(2));
      out[3] -= slip * turning.dot(r.col(1));
      out[4] += slip * turning.dot(r.col(0));
    }
  }
  return out;
}

template <int N>
double Task<N>::target_second(int piece) const {
  const CurveBounds& b = motion_.bounds(piece);
  return std::hypot(b.second_linear / chain_.characteristic_length(),
                    orientation_ == Orientation::free ? 0.0 : b.second_angular);
}

template <int N>
double Task<N>::target_third(int piece) const {
  const CurveBounds& b = motion_.bounds(piece);
  return std::hypot(b.third_linear / chain_.characteristic_length(),
                    orientation_ == Orientation::free ? 0.0 : b.third_angular);
}

/// Negative gradient of H = 1/2 sum ((q - middle) / half range)^2 - w ln sqrt det(J J^T), scaled joints:
/// towards the middle of the limits (Liegeois 1977) and away from singularities (Yoshikawa 1985,
/// manipulability).
template <int N>
JointColumn<N> Task<N>::preference(const TaskState<N>& state) const {
  constexpr double singularity_weight = 0.1;
  const int n = joints();
  JointColumn<N> out;
  if constexpr (N == Eigen::Dynamic) out.resize(n);
  for (int i = 0; i < n; ++i) {
    const Joint& joint = arm_.joints[static_cast<std::size_t>(i)];
    const double half = 0.5 * (joint.upper - joint.lower);
    out[i] = joint.continuous ? 0.0
                              : -(state.q[i] - 0.5 * (joint.lower + joint.upper)) * scale_[i] / (half * half);
  }
  // d/dq_i ln sqrt det(J J^T) = trace(J^+ dJ/dq_i); dJ/dq_i column by column from the axes.
  const double scale = 1.0 / chain_.characteristic_length();
  for (int i = 0; i < n; ++i) {
    if (!chain_.is_revolute(i)) continue;
    const Vector3 axis = state.chain.axes.col(i);
    double gain = 0;
    for (int j = 0; j < n; ++j) {
      const Vector3 other = state.chain.axes.col(j);
      Vector6 column = Vector6::Zero();
      if (chain_.is_revolute(j)) {
        const Vector3 lever = scale * state.chain.levers.col(j);
        const Vector3 own = scale * state.chain.levers.col(i);
        column.head<3>() = i <= j ? axis.cross(other.cross(lever)) : other.cross(axis.cross(own));
        if (i < j) column.tail<3>() = axis.cross(other);
      } else if (i < j) {
        column.head<3>() = axis.cross(other);
      }
      column.head<3>() /= scale;  // bind() scales lengths once more
      gain += state.inverse.row(j).dot(bind(state, column));
    }
    out[i] += singularity_weight * gain;
  }
  return out;
}

template <int N>
void Task<N>::first_derivative(TaskState<N>& state) const {
  const TaskColumn<N> rate = target_rate(state);
  state.rate = state.inverse * rate;
  if constexpr (N != 6) {
    if (joints() > rows_) {
      const JointColumn<N> wish = rate.norm() * preference(state);
      state.rate += wish - state.inverse * (state.jacobian * wish);
    }
  }
}

template <int N>
void Task<N>::derivatives(int piece, TaskState<N>& state) const {
  first_derivative(state);
  state.rate_rate = -(state.inverse * second_order(state, state.rate, 1.0));
  if constexpr (N != 6) {
    if (joints() > rows_) {
      // The flow q' = g(q, s) of a redundant arm: q'' = dg/ds + dg/dq q' by a central difference along the
      // flow. The step balances truncation against rounding at about 1e-10 of the rate.
      const double reach = 1e-5 / std::max(1e-12, state.rate.norm());
      TaskState<N> ahead = state;
      TaskState<N> behind = state;
      ahead.fraction += reach;
      behind.fraction -= reach;
      ahead.q += reach * scale_.cwiseProduct(state.rate);
      behind.q -= reach * scale_.cwiseProduct(state.rate);
      for (TaskState<N>* side : {&ahead, &behind}) {
        evaluate(piece, *side);
        if (!invert(*side)) return;
        first_derivative(*side);
      }
      state.rate_rate = (ahead.rate - behind.rate) / (2 * reach);
    }
  }
}

template <int N>
void Task<N>::bound_bend(TaskState<N>& state) const {
  // Column j of the Jacobian changes with joint i by z_min x (z_max x r_max) (linear) and z_i x z_j / 2
  // (angular, in the chart in which the proof is made; docs/methods.md), where max is the joint nearer the
  // tool: at most |z_max x r_max| and 1/2. Inside the ball the levers grow by at most sqrt(n) * radius * the
  // longest.
  const int n = joints();
  const double scale = 1.0 / chain_.characteristic_length();
  double longest = 0;
  for (int j = 0; j < n; ++j) longest = std::max(longest, scale * state.chain.levers.col(j).norm());
  const double growth = std::sqrt(static_cast<double>(n)) * Bend::radius * (longest + 1.0) /
                        (1.0 - std::sqrt(static_cast<double>(n)) * Bend::radius);
  double first = 0.25 * n * (n - 1);
  double second = static_cast<double>(n * n * n) / 3.0;
  for (int j = 0; j < n; ++j) {
    double arm = 1.0;
    if (chain_.is_revolute(j)) {
      const Vector3 axis = state.chain.axes.col(j);
      arm = scale * axis.cross(Vector3(state.chain.levers.col(j))).norm() + growth;
    }
    first += (2 * j + 1) * arm * arm;
    second += (3 * j * j + 3 * j + 1) * arm * arm;
  }
  state.bend.first = std::sqrt(first);
  state.bend.second = std::sqrt(second);
}

template class Task<6>;
template class Task<Eigen::Dynamic>;

}  // namespace pathvet
