#include "reference_track.hpp"

#include <Eigen/LU>
#include <Eigen/SVD>
#include <cmath>

#include "pathvet/model/units.hpp"

namespace pathvet::test {
namespace {

constexpr double grid_length = 0.5;                      // mm
constexpr double grid_turn = 0.25 * radians_per_degree;  // rad
constexpr double largest_step = 0.02;                    // rad or share of the characteristic length
constexpr double smallest_step = 1e-15;
// A pass is called exact (or not) only well inside (outside) the contract's 1e-4 mm and 1e-5 degrees.
constexpr double exact_length = 1e-4;
constexpr double exact_turn = 1e-5 * radians_per_degree;
constexpr double band = 4;

double size(const ReferenceArm& arm, const Column& change) {
  return change.cwiseQuotient(arm.scale()).cwiseAbs().maxCoeff();
}

Sample sample_at(const ReferenceArm& arm, const ReferenceMotion& motion, double fraction, const Column& q) {
  return {fraction, q, arm.rate(motion.at(fraction), q), arm.smallest_singular_value(q), false};
}

/// 0 where it has no sign.
double determinant_sign(const ReferenceArm& arm, const Column& q) {
  const Eigen::MatrixXd j = arm.jacobian(q, arm.forward(q).rotation);
  return j.rows() == j.cols() ? j.determinant() : 0.0;
}

/// One step of Newton continuation, taken only where predictor and result agree.
bool step(const ReferenceArm& arm, const ReferenceMotion& motion, const Sample& from, double to,
          Sample& out) {
  const double h = to - from.fraction;
  Column q = from.q + h * from.rate;
  if (size(arm, h * from.rate) > largest_step || !arm.solve(motion.at(to).pose, q)) return false;
  if (size(arm, q - from.q) > largest_step) return false;
  out = sample_at(arm, motion, to, q);
  // A step across a singularity has left the branch, or crosses it exactly: bridge() decides.
  if (determinant_sign(arm, from.q) * determinant_sign(arm, q) < 0) return false;
  const double bend = size(arm, out.q - from.q - 0.5 * h * (from.rate + out.rate));
  return bend < 0.03 * size(arm, out.q - from.q) + 1e-9;
}

/// Fraction per mm, a turn counted at half a metre.
double fraction_per_mm(const ReferenceMotion& motion) {
  return 1 / std::max({motion.length(), motion.turn() * 500, 1e-9});
}

/// Looks whether the track comes by an exact singularity near `around`: 1 yes, 0 no, -1 too near to the
/// tolerance to say. Judged from a little before, where the joints don't yet swing on account of a miss.
int exactness(const ReferenceArm& arm, const ReferenceMotion& motion, Track& track, double around) {
  const double away = std::min(fraction_per_mm(motion), 0.3 * (around - track.samples.front().fraction));
  std::size_t i = track.samples.size() - 1;
  while (i > 0 && track.samples[i].fraction > around - away) --i;
  const SingularMiss miss = miss_of_singular(arm, motion, track.samples[i]);
  if (!(std::abs(miss.fraction - around) < 0.3 * away)) return 0;
  if (size(arm, miss.q - track.samples[i].q) > 0.1) return 0;  // a place that only a swing would lead to
  if (miss.length < exact_length / band && miss.turn < exact_turn / band) {
    track.detour = miss.length > 1e-9 || miss.turn > 1e-12;
    return 1;
  }
  return miss.length > exact_length * band || miss.turn > exact_turn * band ? 0 : -1;
}

/// Across an exact singularity on a smooth curve: from before it straight to behind it, from so far away that
/// the miss, if there is one, no longer shows in the rates.
bool bridge(const ReferenceArm& arm, const ReferenceMotion& motion, Track& track, double around) {
  // From near by where the pass is exact to rounding.
  const std::vector<double> widths =
      track.detour ? std::vector<double>{1.0, 0.2, 0.04} : std::vector<double>{0.01, 0.04, 0.2, 1.0};
  for (const double width : widths) {
    const double delta = width * fraction_per_mm(motion);
    std::vector<Sample> kept = track.samples;
    while (kept.size() > 1 && kept.back().fraction > around - delta) kept.pop_back();
    if (kept.back().fraction > around - 0.2 * delta || around + delta > 1) continue;
    Sample before;
    if (!step(arm, motion, kept.back(), around - delta, before) && kept.back().fraction < around - delta)
      continue;
    if (kept.back().fraction >= around - delta) before = kept.back();
    Column q = before.q + (around + delta - before.fraction) * before.rate;
    const Column predicted = q;
    if (!arm.solve(motion.at(around + delta).pose, q) || size(arm, q - predicted) > 0.02) continue;
    Sample after = sample_at(arm, motion, around + delta, q);
    if (size(arm, (after.rate - before.rate) * 2 * delta) > 0.02) continue;
    // Two folds beside each other are no pass: in between the pose has to be met as well.
    bool met = true;
    for (const double u : {0.2, 0.35, 0.42, 0.47, 0.53, 0.58, 0.65, 0.8}) {
      Column inner = (1 - u) * before.q + u * after.q;
      const Column guess = inner;
      met = met && arm.solve(motion.at((1 - u) * before.fraction + u * after.fraction).pose, inner) &&
            size(arm, inner - guess) < 0.05;
    }
    if (!met) continue;
    if (determinant_sign(arm, before.q) * determinant_sign(arm, after.q) < 0) track.flips.push_back(around);
    before.bridge = true;
    if (before.fraction > kept.back().fraction) {
      kept.push_back(before);
    } else {
      kept.back().bridge = true;
    }
    kept.push_back(after);
    track.samples = std::move(kept);
    return true;
  }
  return false;
}

}  // namespace

ReferenceMotion::ReferenceMotion(const Pose& start, const Pose& end, double speed, double turn_rate)
    : start_(start), end_(end.position), from_(start.rotation), to_(end.rotation) {
  const Eigen::AngleAxisd turn{(to_ * from_.conjugate()).normalized()};
  const double angle = turn.angle() > pi ? turn.angle() - 2 * pi : turn.angle();
  spin_ = std::abs(angle) < 1e-12 ? Vector3::Zero() : Vector3(angle * turn.axis());
  duration_ = std::max(length() / speed, this->turn() / turn_rate);
}

MovingTarget ReferenceMotion::at(double fraction) const {
  MovingTarget out;
  out.pose.position = (1 - fraction) * start_.position + fraction * end_;
  out.pose.rotation = from_.slerp(fraction, to_).toRotationMatrix();
  out.velocity = end_ - start_.position;
  out.spin = spin_;
  return out;
}

SingularMiss miss_of_singular(const ReferenceArm& arm, const ReferenceMotion& motion, const Sample& near) {
  // Least weighted miss over joints and fraction with the determinant held at zero: Lagrange multipliers,
  // damped a little along the joints that the pose does not see.
  constexpr double hold = 1e6;
  const Eigen::Index n = arm.joints();
  Column q = near.q;
  double fraction = near.fraction;
  const auto determinant = [&](const Column& at, const Matrix3& rotation) {
    return arm.jacobian(at, rotation).determinant();
  };
  Pose target = motion.at(fraction).pose;
  Column weights = Column::Constant(arm.error(target, q).size(), 1 / exact_turn);
  weights.head(3).setConstant(arm.length() / exact_length);
  for (int i = 0; i < 60; ++i) {
    const MovingTarget moving = motion.at(fraction);
    target = moving.pose;
    const Eigen::MatrixXd j = arm.jacobian(q, target.rotation);
    if (j.rows() != j.cols()) return {fraction, 0, 0, q};
    Eigen::MatrixXd a(j.rows(), n + 1);
    a << j, -arm.bind(target.rotation, moving.velocity, moving.spin);
    a = weights.asDiagonal() * a;
    Column gradient(n);
    for (Eigen::Index k = 0; k < n; ++k) {
      Column up = q, down = q;
      up[k] += 1e-6 * arm.scale()[k];
      down[k] -= 1e-6 * arm.scale()[k];
      gradient[k] = (determinant(up, target.rotation) - determinant(down, target.rotation)) / 2e-6;
    }
    Eigen::MatrixXd kkt = Eigen::MatrixXd::Zero(n + 2, n + 2);
    kkt.topLeftCorner(n + 1, n + 1) = a.transpose() * a;
    kkt.diagonal().head(n + 1).array() += 1e-13 * a.squaredNorm();
    kkt.block(n + 1, 0, 1, n) = hold * gradient.normalized().transpose();
    kkt.block(0, n + 1, n, 1) = hold * gradient.normalized();
    Column right(n + 2);
    right.head(n + 1) = a.transpose() * weights.cwiseProduct(arm.error(target, q));
    right[n + 1] = -hold * determinant(q, target.rotation) / gradient.norm();
    Column change = kkt.fullPivLu().solve(right);
    const double length = change.head(n).norm();
    if (length > 0.05) change *= 0.05 / length;
    q += arm.scale().cwiseProduct(Column(change.head(n)));
    fraction += change[n];
    if (length < 1e-9) break;
  }
  if (!(fraction > -1 && fraction < 2)) return {fraction, 1e9, 1e9, q};
  const auto [length, turn] = arm.miss(motion.at(fraction).pose, q);
  return {fraction, length, turn, q};
}

Track follow(const ReferenceArm& arm, const ReferenceMotion& motion, double from, const Column& q) {
  Track track;
  const double grid = 1.0 / std::max({1.0, motion.length() / grid_length, motion.turn() / grid_turn});
  track.samples.push_back(sample_at(arm, motion, from, q));
  double h = grid;
  double examined = 0;  // fraction up to which minima of the singular value have been looked at
  while (track.samples.back().fraction < 1) {
    const Sample& here = track.samples.back();
    const double to = std::min(1.0, here.fraction + h > 1 - 1e-3 * h ? 1.0 : here.fraction + h);
    Sample next;
    if (to > here.fraction && step(arm, motion, here, to, next)) {
      track.samples.push_back(next);
      h = std::min(grid, 1.6 * h);
    } else {
      h *= 0.5;
    }
    const bool stuck = h < smallest_step;
    const std::size_t n = track.samples.size();
    std::size_t lowest = n - 1;
    const bool passed = n > 2 && track.samples[n - 2].singular < track.samples[n - 1].singular &&
                        track.samples[n - 2].singular < track.samples[n - 3].singular &&
                        track.samples[n - 2].fraction > examined;
    if (passed) lowest = n - 2;
    if (passed || stuck) {
      examined = track.samples[lowest].fraction;
      const int exact = track.samples[lowest].singular < 5e-3
                            ? exactness(arm, motion, track, track.samples[lowest].fraction)
                            : 0;
      const double at = track.samples[lowest].fraction;
      if (exact < 0) {
        track.end = TrackEnd::unclear;
        return track;
      }
      if (exact > 0 && bridge(arm, motion, track, at)) {
        h = 0.1 * grid;
        examined = track.samples.back().fraction + 1e-12;
        continue;
      }
      if (exact > 0 || stuck) {
        while (track.samples.back().fraction > at) track.samples.pop_back();
        track.end = TrackEnd::stuck;
        return track;
      }
    }
    if (n > 200000) {
      track.end = TrackEnd::unclear;
      return track;
    }
  }
  return track;
}

Sample between(const ReferenceArm& arm, const ReferenceMotion& motion, const Track& track, std::size_t index,
               double fraction) {
  const Sample& a = track.samples[index];
  const Sample& b = track.samples[index + 1];
  const double h = b.fraction - a.fraction;
  const double u = (fraction - a.fraction) / h;
  const double u2 = u * u, u3 = u2 * u;
  Column q = (1 - 3 * u2 + 2 * u3) * a.q + (3 * u2 - 2 * u3) * b.q + h * (u - 2 * u2 + u3) * a.rate +
             h * (u3 - u2) * b.rate;
  if (a.bridge) {
    Sample out{fraction, q, (1 - u) * a.rate + u * b.rate, arm.smallest_singular_value(q), true};
    return out;
  }
  if (!arm.solve(motion.at(fraction).pose, q)) q = (1 - u) * a.q + u * b.q;
  return sample_at(arm, motion, fraction, q);
}

}  // namespace pathvet::test
