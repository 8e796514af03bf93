#include "reach.hpp"

#include <Eigen/QR>
#include <boost/math/tools/minima.hpp>
#include <cmath>

#include "pathvet/kinematics/singular_values.hpp"

namespace pathvet {
namespace {

/// Weight of what must be held against what may be missed: the held part then slips by about miss / weight^2.
constexpr double hold = 1e4;
constexpr int most_iterations = 300;
constexpr int grid = 24;          // of the worst miss along a stretch
constexpr std::size_t every = 6;  // places of the grid one is looked at from all starts
constexpr double held_orientation = 1e-3 * radians_per_degree;
constexpr double held_position = 1e-2;  // mm

using Rows = Eigen::Matrix<double, Eigen::Dynamic, 1, 0, 6, 1>;
using Matrix = Eigen::Matrix<double, Eigen::Dynamic, Eigen::Dynamic, 0, 6 + max_joints, max_joints>;

Rows pose_error(const ArmContext& context, const Pose& target, const Pose& now) {
  const Vector3 position = (target.position - now.position) / context.chain.characteristic_length();
  if (context.orientation == Orientation::free) return position;
  if (context.orientation == Orientation::full) {
    Rows out(6);
    out << position, rotation_vector(target.rotation * now.rotation.transpose());
    return out;
  }
  const Vector3 across = now.rotation.col(2).cross(target.rotation.col(2));
  const double angle = std::atan2(across.norm(), now.rotation.col(2).dot(target.rotation.col(2)));
  const Vector3 turn = across.norm() > 0 ? Vector3(across.normalized() * angle) : Vector3::Zero();
  Rows out(5);
  out << position, now.rotation.leftCols<2>().transpose() * turn;
  return out;
}

/// Levenberg-Marquardt on weighted rows.
JointVector minimise(const ArmContext& context, const Pose& target, JointVector q, double position_weight,
                     double orientation_weight) {
  const int n = context.chain.joint_count();
  JointVector scale(n);
  for (int i = 0; i < n; ++i)
    scale[i] = context.chain.is_revolute(i) ? 1.0 : context.chain.characteristic_length();
  const auto weighted = [&](const JointVector& at) {
    Rows e = pose_error(context, target, context.chain.forward(at));
    e.head(3) *= position_weight;
    if (e.size() > 3) e.tail(e.size() - 3) *= orientation_weight;
    return e;
  };
  double damping = 1e-3;
  Rows error = weighted(q);
  int settled = 0;
  for (int i = 0; i < most_iterations && settled < 3; ++i) {
    Matrix jacobian(error.size() + n, n);
    jacobian.topRows(error.size()) = bound_jacobian(context.chain, q, context.orientation);
    jacobian.topRows(3) *= position_weight;
    if (error.size() > 3) jacobian.middleRows(3, error.size() - 3) *= orientation_weight;
    jacobian.bottomRows(n).setZero();
    jacobian.bottomRows(n).diagonal().setConstant(std::sqrt(damping));
    Eigen::Matrix<double, Eigen::Dynamic, 1, 0, 6 + max_joints, 1> right(error.size() + n);
    right.head(error.size()) = error;
    right.tail(n).setZero();
    const JointVector change = jacobian.colPivHouseholderQr().solve(right);
    const JointVector moved = q + scale.cwiseProduct(change);
    const Rows next = weighted(moved);
    if (next.squaredNorm() <= error.squaredNorm()) {
      settled = error.squaredNorm() - next.squaredNorm() < 1e-14 * error.squaredNorm() ? settled + 1 : 0;
      q = moved;
      error = next;
      damping = std::max(1e-12, damping * 0.2);
    } else {
      damping *= 8;
      if (damping > 1e8) break;
    }
  }
  return q;
}

/// The weight of what is held grows in stages: with the whole of it at once the way along the held poses is
/// so narrow that the steps stall far from the least miss.
JointVector minimise_holding(const ArmContext& context, const Pose& target, JointVector q, bool orientation) {
  for (const double weight : {1.0, 30.0, 1e3, hold})
    q = minimise(context, target, q, orientation ? 1 : weight, orientation ? weight : 1);
  return q;
}

Miss measure(const ArmContext& context, const Pose& target, const JointVector& q) {
  Miss out;
  out.joints = q;
  const Rows error = pose_error(context, target, context.chain.forward(q));
  out.position = error.head(3).norm() * context.chain.characteristic_length();
  out.orientation = error.size() > 3 ? error.tail(error.size() - 3).norm() : 0.0;
  return out;
}

/// Starts spread round a configuration: as it is, and with each joint turned a good way.
std::vector<JointVector> starts_round(const ArmContext& context, const JointVector& q) {
  std::vector<JointVector> out{q};
  for (int i = 0; i < q.size(); ++i) {
    for (const double turn : {-2.0, -0.7, 0.7, 2.0}) {
      JointVector moved = q;
      moved[i] += context.chain.is_revolute(i) ? turn : turn * context.chain.characteristic_length();
      out.push_back(moved);
    }
  }
  return out;
}

Miss least_from(const ArmContext& context, const Pose& target, const std::vector<JointVector>& starts) {
  std::optional<Miss> best;
  for (const JointVector& q : starts) {
    const Miss miss = measure(context, target, minimise_holding(context, target, q, true));
    if (miss.orientation < held_orientation && (!best || miss.position < best->position)) best = miss;
  }
  if (best) {
    best->holds_orientation = true;
    return *best;
  }
  for (const JointVector& q : starts) {
    const Miss miss = measure(context, target, minimise_holding(context, target, q, false));
    if (miss.position < held_position && (!best || miss.orientation < best->orientation)) best = miss;
  }
  if (best) {
    best->holds_position = true;
    return *best;
  }
  double least = std::numeric_limits<double>::infinity();
  for (const JointVector& q : starts) {
    const Miss miss = measure(context, target, minimise(context, target, q, 1, 1));
    const double size = std::hypot(miss.position / context.chain.characteristic_length(), miss.orientation);
    if (size < least) {
      least = size;
      best = miss;
    }
  }
  return *best;
}

}  // namespace

Miss least_miss(const ArmContext& context, const Pose& target, const JointVector& start) {
  return least_from(context, target, starts_round(context, start));
}

Miss worst_miss(const ArmContext& context, const std::function<Pose(double)>& target, double from, double to,
                const JointVector& start) {
  // From one place to the next the least miss is followed; where it counts, and now and then, it is sought
  // from all starts, since another configuration may have come to miss by less.
  const auto at = [&](double fraction, const JointVector& near, bool thorough) {
    Miss miss = thorough ? least_miss(context, target(fraction), near)
                         : least_from(context, target(fraction), {near});
    miss.fraction = fraction;
    return miss;
  };
  const auto size = [&](const Miss& miss) {
    return miss.holds_position ? miss.orientation * context.chain.characteristic_length() : miss.position;
  };
  if (!(to > from)) return at(from, start, true);
  std::array<Miss, grid + 1> misses;
  std::array<bool, grid + 1> thorough{};
  for (std::size_t i = 0; i <= grid; ++i) {
    const double fraction = from + (to - from) * static_cast<double>(i) / grid;
    const JointVector& near = i == 0 ? start : misses[i - 1].joints;
    thorough[i] = i % every == 0;
    misses[i] = at(fraction, near, thorough[i]);
    if (!thorough[i] && misses[i].holds_orientation != misses[i - 1].holds_orientation) {
      thorough[i] = true;
      misses[i] = at(fraction, near, true);
    }
  }
  std::size_t worst = 0;
  while (true) {
    for (std::size_t i = 0; i <= grid; ++i) {
      if (size(misses[i]) > size(misses[worst])) worst = i;
    }
    if (thorough[worst]) break;
    misses[worst] = at(misses[worst].fraction, misses[worst].joints, true);
    thorough[worst] = true;
  }
  if (worst == 0 || worst == grid) return misses[worst];
  const JointVector near = misses[worst].joints;
  const auto negative = [&](double fraction) { return -size(at(fraction, near, false)); };
  std::uintmax_t iterations = 40;
  const double best = boost::math::tools::brent_find_minima(negative, misses[worst - 1].fraction,
                                                            misses[worst + 1].fraction, 30, iterations)
                          .first;
  const Miss refined = at(best, near, true);
  return size(refined) > size(misses[worst]) ? refined : misses[worst];
}

}  // namespace pathvet
