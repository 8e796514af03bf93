#include "kinematics/pose_solver.hpp"

#include <Eigen/Cholesky>
#include <Eigen/LU>
#include <cmath>

namespace pathvet::detail {

namespace {

/// A pivot below this share of the largest is a lost rank: a double solution is met to about 1e-7.
constexpr double rank_threshold = 1e-6;
/// Below this scaled error nothing is left to gain: about ten roundings of the forward map.
constexpr double rounding_error = 2e-15;
/// A refused step below this squared error was spoilt by rounding, not by curvature.
constexpr double refused_at_rounding = 1e-24;
constexpr double first_damping = 0.05;
/// Keeps the factorisation positive where the Jacobian has lost rank; far below what slows the convergence.
constexpr double least_damping = 1e-15;
/// Steps that gain less than this share of the squared error are idle; so many idle or refused ones in a row
/// end it.
constexpr double idle_share = 1e-3;
constexpr int idle_most = 6;

/// Rotation vector of the rotation that is still to be done, as far as it binds.
Vector3 rotation_left(const Matrix3& target, const Matrix3& now, Orientation orientation) {
  if (orientation == Orientation::free) return Vector3::Zero();
  if (orientation == Orientation::full) {
    const Matrix3 left = target * now.transpose();
    // Near zero the antisymmetric part is the rotation vector to third order, exact enough to converge on.
    const Vector3 sines(left(2, 1) - left(1, 2), left(0, 2) - left(2, 0), left(1, 0) - left(0, 1));
    if (left.trace() > 2.999) return 0.5 * sines;
    return rotation_vector(left);
  }
  const Vector3 across = now.col(2).cross(target.col(2));
  const double sine = across.norm();
  const double cosine = now.col(2).dot(target.col(2));
  if (sine > 0) return std::atan2(sine, cosine) / sine * across;
  return cosine > 0 ? Vector3::Zero() : Vector3(std::acos(-1.0) * now.col(0));
}

template <int N>
struct Iterate {
  JointColumn<N> q;
  ChainState<N> state;
  Vector3 position;  ///< error over the characteristic length
  Vector3 rotation;
  double square = 0;
};

template <int N>
void measure(const Chain& chain, const Pose& target, Orientation orientation, Iterate<N>& at) {
  chain.evaluate<N>(at.q, at.state);
  at.position = (target.position - at.state.tcp.position) / chain.characteristic_length();
  at.rotation = rotation_left(target.rotation, at.state.tcp.rotation, orientation);
  at.square = at.position.squaredNorm() + at.rotation.squaredNorm();
}

/// Rows that don't bind are projected out.
template <int N>
void bound_jacobian(const Chain& chain, const Pose& target, Orientation orientation, const Iterate<N>& at,
                    JacobianMatrix<N>& jacobian) {
  chain.scaled_jacobian<N>(at.state, jacobian);
  if (orientation == Orientation::free) jacobian.template bottomRows<3>().setZero();
  if (orientation == Orientation::axis) {
    const Vector3 axis = target.rotation.col(2);
    const Matrix3 across = Matrix3::Identity() - axis * axis.transpose();
    jacobian.template bottomRows<3>() = (across * jacobian.template bottomRows<3>()).eval();
  }
}

}  // namespace

int bound_rows(Orientation orientation) {
  switch (orientation) {
    case Orientation::full:
      return 6;
    case Orientation::axis:
      return 5;
    case Orientation::free:
      break;
  }
  return 3;
}

Miss PoseSolver::miss(const Pose& target, const JointVector& q) const {
  return chain_->joint_count() == 6 ? miss_sized<6>(target, q) : miss_sized<Eigen::Dynamic>(target, q);
}

template <int N>
Miss PoseSolver::miss_sized(const Pose& target, const JointVector& q) const {
  Iterate<N> at;
  at.q = q;
  measure<N>(*chain_, target, orientation_, at);
  return {at.position.norm(), at.rotation.norm()};
}

int PoseSolver::rank(const Pose& target, const JointVector& q) const {
  Iterate<Eigen::Dynamic> at;
  at.q = q;
  chain_->evaluate<Eigen::Dynamic>(q, at.state);
  Jacobian jacobian;
  bound_jacobian<Eigen::Dynamic>(*chain_, target, orientation_, at, jacobian);
  Eigen::FullPivLU<Jacobian> factor(jacobian);
  factor.setThreshold(rank_threshold);
  return static_cast<int>(factor.rank());
}

Miss PoseSolver::solve(const Pose& target, JointVector& q, int most_steps) const {
  return chain_->joint_count() == 6 ? solve_sized<6>(target, q, most_steps)
                                    : solve_sized<Eigen::Dynamic>(target, q, most_steps);
}

template <int N>
Miss PoseSolver::solve_sized(const Pose& target, JointVector& q, int most_steps) const {
  using Square = Eigen::Matrix<double, N, N, 0, bounded<N>, bounded<N>>;
  const int n = chain_->joint_count();
  JointColumn<N> units(n);  // the scaled Jacobian counts a prismatic joint in characteristic lengths
  for (int i = 0; i < n; ++i) units[i] = chain_->is_revolute(i) ? 1.0 : chain_->characteristic_length();

  Iterate<N> best;
  best.q = q;
  measure<N>(*chain_, target, orientation_, best);
  Iterate<N> tried = best;
  JacobianMatrix<N> jacobian;
  Square normal(n, n);
  JointColumn<N> gradient(n);
  double damping = std::max(std::min(first_damping, best.square), least_damping);
  bool moved = true;
  int idle = 0;
  for (int step = 0; step < most_steps && idle < idle_most; ++step) {
    if (best.square <= rounding_error * rounding_error) break;
    if (moved) {
      bound_jacobian<N>(*chain_, target, orientation_, best, jacobian);
      normal.noalias() = jacobian.transpose() * jacobian;
      gradient.noalias() = jacobian.template topRows<3>().transpose() * best.position;
      gradient.noalias() += jacobian.template bottomRows<3>().transpose() * best.rotation;
    }
    Square damped = normal;
    damped.diagonal().array() += damping;
    const JointColumn<N> change = damped.llt().solve(gradient);
    tried.q = best.q + units.cwiseProduct(change);
    measure<N>(*chain_, target, orientation_, tried);
    moved = tried.square < best.square;
    if (moved) {
      idle = tried.square > (1 - idle_share) * best.square ? idle + 1 : 0;
      std::swap(best, tried);
      damping = std::max(0.1 * std::min(damping, best.square), least_damping);
    } else {
      ++idle;
      damping *= 8;
      if (best.square < refused_at_rounding) break;
    }
  }
  q = best.q;
  return {best.position.norm(), best.rotation.norm()};
}

}  // namespace pathvet::detail
