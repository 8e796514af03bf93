#include "segment_follower.hpp"

#include <Eigen/SVD>
#include <cmath>

#include "pathvet/kinematics/singular_values.hpp"
#include "pathvet/tracking/continuity.hpp"
#include "pathvet/tracking/hermite.hpp"
#include "pathvet/tracking/nearest.hpp"

// Why a step cannot miss an event (docs/methods.md, "Proof of continuity"): follow_fraction only makes steps
// whose whole travel stays inside the ball in which the Jacobian provably keeps its rank, so that the curve
// through the begin is unique up to the end; the corrected end lies in the same ball and therefore on that
// curve. Where such a step would be shorter than `least_share` of the nominal one, the curve is followed by
// arc length instead, with the same proof in one more variable.

namespace pathvet {
namespace {

constexpr double proof_share = 0.9;  // of the provable travel, so that rounding never decides
constexpr int most_corrections = 12;
constexpr double converged = 2e-11;         // scaled; the next correction would be its square
constexpr double suspicious = 1e-2;         // smallest singular value; above it no pass is exact
constexpr double largest_correction = 0.3;  // scaled; a larger one has left the branch

}  // namespace

template <int N>
SegmentFollower<N>::SegmentFollower(const ArmContext& context, const SegmentMotion& motion,
                                    const FollowSettings& settings)
    : context_(context),
      motion_(motion),
      settings_(settings),
      task_(context.arm, context.chain, motion, context.orientation),
      general_(context.arm, context.chain, motion, context.orientation) {}

template <int N>
typename SegmentFollower<N>::End SegmentFollower<N>::run(const JointVector& q, bool reached,
                                                         std::string& branch, TrackSink& sink) {
  signs_ = branch;
  State state;
  state.q = q;
  lost_ = !reached;
  if (lost_) sink.lost(0.0, q);
  for (piece_ = 0; piece_ < motion_.piece_count(); ++piece_) {
    end_ = motion_.piece_end(piece_);
    spacing_ = spacing(piece_);
    state.fraction = motion_.piece_begin(piece_);
    std::optional<ArcTracker::Unknowns> sense;
    Outcome outcome = lost_ ? recover(state, sense, sink) : begin_piece(state, sink);
    while (outcome != Outcome::end) {
      if (outcome == Outcome::stopped) return {state.q, !lost_, true};
      if (outcome == Outcome::calm) {
        outcome = follow_fraction(state, sink);
      } else if (outcome == Outcome::singular) {
        outcome =
            task_.joints() <= task_.rows() ? follow_arc(state, sense, sink) : follow_damped(state, sink);
        sense.reset();
      } else {
        outcome = recover(state, sense, sink);
      }
    }
  }
  branch = signs_;
  return {state.q, !lost_, false};
}

/// The nominal spacing of samples: the piece cut evenly so that neither the TCP nor its orientation moves
/// further than asked from sample to sample.
template <int N>
double SegmentFollower<N>::spacing(int piece) const {
  // Along a straight line with an even turn nothing changes; elsewhere the motion is looked at in several
  // places.
  const CurveBounds& bounds = motion_.bounds(piece);
  const int probes = bounds.second_linear > 0 || bounds.second_angular > 0 ? 9 : 1;
  const double begin = motion_.piece_begin(piece);
  const double length = motion_.piece_end(piece) - begin;
  double most = 0;
  CurvePoint point;
  for (int i = 0; i < probes; ++i) {
    motion_.at(piece, begin + length * i / std::max(1, probes - 1), point);
    most = std::max({most, point.first.head<3>().norm() / settings_.step_length,
                     point.first.tail<3>().norm() / settings_.step_angle});
  }
  return length / std::max(1.0, std::ceil(most * length - 1e-9));
}

template <int N>
void SegmentFollower<N>::adopt(State& state, double fraction, const JointVector& q) const {
  state.fraction = fraction;
  state.q = q;
}

template <int N>
Pose SegmentFollower<N>::pose_at(double fraction) const {
  CurvePoint point;
  motion_.at(piece_, fraction, point);
  return point.pose;
}

template <int N>
double SegmentFollower<N>::scaled_speed(double fraction) const {
  CurvePoint point;
  motion_.at(piece_, fraction, point);
  return std::hypot(point.first.head<3>().norm() / context_.chain.characteristic_length(),
                    context_.orientation == Orientation::free ? 0.0 : point.first.tail<3>().norm());
}

/// Newton (the damped step with a damping driven by the error, which is below rounding here) until the
/// correction is too small to matter. Leaves inverse and derivatives at the converged joints.
template <int N>
bool SegmentFollower<N>::converge(int piece, State& state) const {
  double last = 1;
  for (int i = 0; i < most_corrections; ++i) {
    task_.evaluate(piece, state);
    if (!task_.invert(state)) return false;
    const JointColumn<N> change = state.inverse * state.error;
    const double size = change.norm();
    if (!(size < largest_correction)) return false;
    state.q += task_.scale().cwiseProduct(change);
    state.error -= state.jacobian * change;
    // Badly conditioned places stall at a multiple of rounding; a correction that no longer shrinks is as
    // good.
    if (size < converged || (i >= 2 && size > 0.3 * last && size < 1e-9)) {
      task_.derivatives(piece, state);
      return state.rate.allFinite();
    }
    last = size;
  }
  return false;
}

template <int N>
bool SegmentFollower<N>::within_tolerance(const State& state) const {
  const double position = state.error.template head<3>().norm() * context_.chain.characteristic_length();
  const double orientation = state.error.size() > 3 ? state.error.tail(state.error.size() - 3).norm() : 0.0;
  return position <= position_tolerance && orientation <= orientation_tolerance;
}

template <int N>
Node SegmentFollower<N>::node(const State& state) const {
  Node out;
  out.fraction = state.fraction;
  out.q = state.q;
  out.rate = task_.scale().cwiseProduct(state.rate);
  out.rate_rate = task_.scale().cwiseProduct(state.rate_rate);
  if constexpr (N == 6) {
    out.singular_low = smallest_singular_low(state.inverse);
  } else {
    out.singular_low = 1.0 / state.inverse_norm;
  }
  return out;
}

template <int N>
bool SegmentFollower<N>::emit(const Step& step, const State& at_end, TrackSink& sink) const {
  const double position = at_end.error.template head<3>().norm() * context_.chain.characteristic_length();
  const double orientation =
      at_end.error.size() > 3 ? at_end.error.tail(at_end.error.size() - 3).norm() : 0.0;
  return sink.step(step, position, orientation);
}

/// The longest proven step by the fraction from a state.
template <int N>
double SegmentFollower<N>::affordable(const State& state) const {
  const double travel = proof_share * provable_travel(state.inverse_norm, state.bend.first);
  const double speed = state.rate.norm();
  const double growth = 0.5 * state.inverse_norm * task_.target_second(piece_);
  // speed h + growth h^2 = travel, in the form without cancellation
  const double root = speed + std::sqrt(speed * speed + 4 * growth * travel);
  return root > 0 ? 2 * travel / root : 1.0;
}

template <int N>
bool SegmentFollower<N>::regular(State& state) const {
  if (!converge(state)) return false;
  task_.bound_bend(state);
  return affordable(state) >= calm_share * spacing_;
}

template <int N>
typename SegmentFollower<N>::Outcome SegmentFollower<N>::begin_piece(State& state, TrackSink& sink) {
  State converged_state = state;
  const bool met = converge(converged_state);
  // 1 / inverse_norm is a lower bound of the smallest singular value.
  const bool suspect = !met || converged_state.inverse_norm * suspicious > 1;
  if (suspect && exactly_singular(state)) return restart(state, sink);
  if (met) {
    if (!within_tolerance(converged_state)) return Outcome::lost;
    state = converged_state;
    if (piece_ == 0) signs_ = context_.branches.signs(state.q);
    task_.bound_bend(state);
    return affordable(state) >= least_share * spacing_ ? Outcome::calm : Outcome::singular;
  }
  task_.evaluate(piece_, state);
  return within_tolerance(state) ? Outcome::singular : Outcome::lost;
}

template <int N>
typename SegmentFollower<N>::Outcome SegmentFollower<N>::follow_fraction(State& state, TrackSink& sink) {
  // The two states take turns: they are large, and swapping or copying them would cost as much as a Jacobian.
  State spare;
  State* now = &state;
  State* ahead = &spare;
  const Outcome outcome = take_steps(now, ahead, sink);
  if (now != &state) state = *now;
  return outcome;
}

template <int N>
typename SegmentFollower<N>::Outcome SegmentFollower<N>::take_steps(State*& now, State*& ahead,
                                                                    TrackSink& sink) {
  const double begin = motion_.piece_begin(piece_);
  const double second = task_.target_second(piece_);
  const double third = task_.target_third(piece_);
  const bool tall = task_.joints() < task_.rows();
  JointColumn<N> jerk = JointColumn<N>::Zero(task_.joints());
  Step step;
  step.begin = node(*now);
  while (now->fraction < end_) {
    State& state = *now;
    State& next = *ahead;
    task_.bound_bend(state);
    const double grid = begin + spacing_ * std::floor((state.fraction - begin) / spacing_ + 1.0 + 1e-6);
    const double wanted = grid > end_ - 1e-6 * spacing_ ? end_ : grid;
    const double most = affordable(state);
    if (most < least_share * spacing_) return Outcome::singular;
    double h = wanted - state.fraction;
    next.fraction = wanted;
    if (most < h) {
      h = most;
      next.fraction = state.fraction + h;
    }
    next.q =
        state.q + task_.scale().cwiseProduct(h * (state.rate + h * (0.5 * state.rate_rate + h / 6 * jerk)));
    if (!converge(next)) return Outcome::singular;
    if (tall && !within_tolerance(next)) {
      // The arm can't hold the pose: find where the miss leaves the tolerance.
      double inside = state.fraction;
      double outside = next.fraction;
      State middle = state;
      while (outside - inside > 1e-12) {
        middle.fraction = 0.5 * (inside + outside);
        if (middle.fraction <= inside || middle.fraction >= outside) break;
        if (converge(middle) && within_tolerance(middle)) {
          inside = middle.fraction;
          next = middle;
        } else {
          outside = middle.fraction;
        }
      }
      if (next.fraction > outside) return Outcome::lost;
      h = next.fraction - state.fraction;
    }
    jerk = (next.rate_rate - state.rate_rate) / h;
    step.kind = Step::Kind::fraction;
    step.piece = piece_;
    step.length = h;
    step.end = node(next);
    prove(step, state.inverse_norm, state.bend.first, state.bend.second,
          state.rate.norm() + h * state.inverse_norm * second, second, third);
    const bool cut = tall && next.fraction != wanted && most >= wanted - state.fraction;
    std::swap(now, ahead);
    if constexpr (N == 6) {
      step.end_inverse = &next.inverse;
      step.end_chain = &next.chain;
    }
    if (!emit(step, next, sink)) return Outcome::stopped;
    if (cut) return Outcome::lost;
    step.begin = step.end;
  }
  signs_ = context_.branches.signs(now->q);
  return Outcome::end;
}

template <int N>
void SegmentFollower<N>::at(const Step& step, double t, Node& out) const {
  if (step.kind == Step::Kind::interpolated) {
    interpolate(step, t, out);
    return;
  }
  if (step.kind == Step::Kind::arc) {
    ArcTracker(general_, step.piece).at(step, t, out);
    return;
  }
  interpolate(step, t, out);
  State state;
  adopt(state, step.begin.fraction + t, out.q);
  if (converge(step.piece, state)) out = node(state);
}

template <int N>
bool SegmentFollower<N>::exactly_singular(const State& state) const {
  constexpr double h = 1e-6;
  TaskState<Eigen::Dynamic> general;
  general.q = state.q;
  general.fraction = state.fraction;
  general_.evaluate(piece_, general);
  using Matrix = Eigen::Matrix<double, Eigen::Dynamic, Eigen::Dynamic, 0, max_joints, max_joints>;
  const Eigen::JacobiSVD<Matrix> svd(Matrix(general.jacobian), Eigen::ComputeThinU | Eigen::ComputeThinV);
  const auto last = svd.singularValues().size() - 1;
  const double smallest = svd.singularValues()[last];
  if (smallest > suspicious) return false;
  if (smallest < 1e-13) return true;
  const Eigen::Matrix<double, Eigen::Dynamic, 1, 0, 6, 1> u = svd.matrixU().col(last);
  const JointVector v = svd.matrixV().col(last);
  // The gradient of the smallest singular value by the joints, turned into the smallest change of the pose
  // that brings it to zero (to first order).
  JointVector gradient(general_.joints());
  for (int i = 0; i < general_.joints(); ++i) {
    double sides[2];
    for (int side = 0; side < 2; ++side) {
      TaskState<Eigen::Dynamic> moved = general;
      moved.q[i] += (side == 0 ? h : -h) * general_.scale()[i];
      general_.evaluate(piece_, moved);
      sides[side] = u.dot(moved.jacobian * v);
    }
    gradient[i] = (sides[0] - sides[1]) / (2 * h);
  }
  JointVector coefficients = svd.matrixV().transpose() * gradient;
  coefficients.array() /= svd.singularValues().array();
  const Eigen::Matrix<double, Eigen::Dynamic, 1, 0, 6, 1> direction = svd.matrixU() * coefficients;
  const double norm = direction.squaredNorm();
  if (!(norm > 0)) return false;
  const auto miss = -smallest / norm * direction;
  const double position = miss.template head<3>().norm() * context_.chain.characteristic_length();
  const double orientation = direction.size() > 3 ? miss.tail(direction.size() - 3).norm() : 0.0;
  return position <= exact_position && orientation <= exact_orientation;
}

template class SegmentFollower<6>;
template class SegmentFollower<Eigen::Dynamic>;

std::unique_ptr<Follower> make_follower(const ArmContext& context, const SegmentMotion& motion,
                                        const FollowSettings& settings) {
  if (context.arm.joint_count() == 6 && context.orientation == Orientation::full)
    return std::make_unique<SegmentFollower<6>>(context, motion, settings);
  return std::make_unique<SegmentFollower<Eigen::Dynamic>>(context, motion, settings);
}

}  // namespace pathvet
