#include <Eigen/SVD>
#include <boost/math/tools/toms748_solve.hpp>
#include <cmath>

#include "pathvet/tracking/continuity.hpp"
#include "pathvet/tracking/hermite.hpp"
#include "pathvet/tracking/nearest.hpp"
#include "segment_follower.hpp"

// The singular part of a segment: followed by arc length, across exact singularities, past folds and jumps,
// and from where the pose comes back into reach.

namespace pathvet {
namespace {

/// Below this regularity of the arc's linearised task a meeting with another solution curve is looked for. A
/// pass that misses by the exact tolerance (about 1e-7 in scaled units) bottoms out near its square root.
constexpr double suspicious_regularity = 4e-3;
/// Scaled distance to a meeting that is crossed in one step. The curve that misses it by the exact tolerance
/// e strays from the smooth one by about e / distance^2 in its rates, the quintic across by about (2
/// distance)^5: here both are near 1e-5.
constexpr double meeting_reach = 0.04;
constexpr int most_arc_steps = 200000;
constexpr double least_arc_step = 1e-13;
/// The solutions beyond a singular place are looked at this far ahead (scaled length of the target's motion):
/// far beyond the tolerance of an exact pass, near enough to be "there".
constexpr double probe_length = 1e-5;
constexpr double nearest_probe = 0.009;  // of it: the nearest that is still beyond the tolerance
/// Solutions this near to each other (rad, scaled) belong to one fold seen from the probe.
constexpr double fold_reach = 0.3;
/// From an exactly singular begin the motion's direction decides, which is known to about the exact tolerance
/// over this; a restart that moves no joint further than `continuous_reach` is continuous.
constexpr double restart_length = 1e-4;
constexpr double continuous_reach = 3e-3;
constexpr double truncated = 1e-4;  // singular values below it are left out of a damped step

double largest_change(const JointVector& a, const JointVector& b, const JointVector& scale) {
  return (a - b).cwiseQuotient(scale).cwiseAbs().maxCoeff();
}

/// Root of f in [0, length] with a sign change, to the last bits.
template <typename F>
double root(F f, double length, double at_begin, double at_end) {
  if (at_begin == 0) return 0;
  if (at_end == 0) return length;
  std::uintmax_t iterations = 100;
  const auto bracket = boost::math::tools::toms748_solve(
      f, 0.0, length, at_begin, at_end, boost::math::tools::eps_tolerance<double>(50), iterations);
  return std::abs(f(bracket.first)) < std::abs(f(bracket.second)) ? bracket.first : bracket.second;
}

}  // namespace

template <int N>
typename SegmentFollower<N>::Outcome SegmentFollower<N>::follow_arc(
    State& state, const std::optional<ArcTracker::Unknowns>& sense, TrackSink& sink) {
  ArcTracker arc(general_, piece_);
  if (sense) {
    arc.start(state.fraction, state.q, *sense);
  } else {
    arc.start(state.fraction, state.q);
  }
  State at_end = state;
  at_end.error = TaskColumn<N>::Zero(task_.rows());
  double examined = suspicious_regularity;
  Step step;
  const auto past_end = [&](const Node& n) { return n.fraction - end_; };
  const auto solve = [&](const auto& value) {
    const auto at = [&](double t) {
      Node node;
      arc.at(step, t, node);
      return value(node);
    };
    return root(at, step.length, value(step.begin), value(step.end));
  };
  const auto trim = [&](double t) {
    Node node;
    arc.at(step, t, node);
    step.end = node;
    step.length = t;
  };
  for (int i = 0; i < most_arc_steps; ++i) {
    const ArcTracker::Place& place = arc.place();
    const int joints = task_.joints();
    if (place.regularity < examined) {
      examined = 0.7 * place.regularity;
      const auto meeting = arc.meeting();
      if (meeting && meeting->crosses && meeting->position_miss <= exact_position &&
          meeting->orientation_miss <= exact_orientation && (meeting->y - place.y).norm() < meeting_reach) {
        const Outcome crossed = cross_meeting(arc, *meeting, sink);
        if (crossed == Outcome::end) {
          adopt(state, end_, task_.scale().cwiseProduct(arc.place().y.head(joints)));
          state.q = task_.scale().cwiseProduct(JointVector(meeting->y.head(joints)));
          return crossed;
        }
        if (crossed == Outcome::stopped) return crossed;
        if (crossed == Outcome::calm) {
          examined = suspicious_regularity;
          if (arc.place().task.fraction >= end_) {
            adopt(state, end_, arc.place().task.q);
            return Outcome::end;
          }
          // Beyond the meeting the regularity grows again; the next look is due only if it falls anew.
          examined = 0.5 * arc.place().regularity;
          continue;
        }
      }
    } else if (place.regularity > 2 * examined) {
      examined = std::min(suspicious_regularity, place.regularity);
    }
    const double along = std::abs(arc.unit() * place.tangent[joints]);
    const double most = along > 0 ? spacing_ / along : 1.0;
    if (!arc.advance(most, step) || step.length < least_arc_step) {
      adopt(state, place.task.fraction, place.task.q);
      return follow_damped(state, sink);
    }
    if (step.end.fraction >= end_ && step.end.fraction_rate > 0) {
      trim(solve(past_end));
      step.end.fraction = end_;
      if (!emit(step, at_end, sink)) return Outcome::stopped;
      adopt(state, end_, step.end.q);
      signs_ = context_.branches.signs(state.q);
      return Outcome::end;
    }
    if (step.end.fraction_rate <= 0 && step.begin.fraction_rate > 0) {
      trim(solve([](const Node& n) { return n.fraction_rate; }));
      const bool beyond = step.end.fraction > end_;
      if (beyond) {
        // The fold lies past the piece's end: the end is met on the way there.
        trim(solve(past_end));
        step.end.fraction = end_;
      } else {
        step.end.fraction_rate = 0;
      }
      if (!emit(step, at_end, sink)) return Outcome::stopped;
      adopt(state, step.end.fraction, step.end.q);
      if (!beyond) return Outcome::lost;
      signs_ = context_.branches.signs(state.q);
      return Outcome::end;
    }
    if (!emit(step, at_end, sink)) return Outcome::stopped;
    if (step.end.fraction_rate > 0) {
      State calm;
      adopt(calm, step.end.fraction, step.end.q);
      task_.evaluate(piece_, calm);
      if (task_.invert(calm)) {
        task_.derivatives(piece_, calm);
        task_.bound_bend(calm);
        if (affordable(calm) >= calm_share * spacing_ && regular(calm)) {
          state = calm;
          signs_ = context_.branches.signs(state.q);
          return Outcome::calm;
        }
      }
    }
  }
  adopt(state, arc.place().task.fraction, arc.place().task.q);
  return follow_damped(state, sink);
}

/// A step across an exact singularity in parts as near to each other as samples have to be: the same curve,
/// looked at in more places, with the residual that it has there.
template <int N>
bool SegmentFollower<N>::emit_crossing(const Step& step, TrackSink& sink) const {
  const double share = std::abs(step.end.fraction - step.begin.fraction) / spacing_;
  const int parts = std::max(1, static_cast<int>(std::ceil(share - 1e-9)));
  Step part = step;
  part.length = step.length / parts;
  TaskState<Eigen::Dynamic> at;
  for (int i = 1; i <= parts; ++i) {
    if (i == parts) {
      part.end = step.end;
    } else {
      interpolate(step, i * part.length, part.end);
    }
    at.q = part.end.q;
    at.fraction = part.end.fraction;
    general_.evaluate(step.piece, at);
    const double position = at.error.head<3>().norm() * context_.chain.characteristic_length();
    const double orientation = at.error.size() > 3 ? at.error.tail(at.error.size() - 3).norm() : 0.0;
    part.proven = step.proven && position <= position_tolerance && orientation <= orientation_tolerance;
    if (!sink.step(part, position, orientation)) return false;
    part.begin = part.end;
  }
  return true;
}

/// Across (or up to) an exact singularity on the smooth continuation.
template <int N>
typename SegmentFollower<N>::Outcome SegmentFollower<N>::cross_meeting(ArcTracker& arc,
                                                                       const ArcTracker::Meeting& meeting,
                                                                       TrackSink& sink) {
  const int joints = task_.joints();
  Step step;
  const double here = arc.place().task.fraction;
  const double ahead = arc.unit() * meeting.ahead[joints];  // fraction per arc length
  // An exact pass that is met within the exact tolerance of the end belongs to the end.
  const double slack = 1e-7 / std::max(1e-12, scaled_speed(end_));
  if (meeting.fraction >= end_ - slack) {
    if (end_ - here < 0) return Outcome::lost;
    arc.stop_at(meeting, end_, step);
    return emit_crossing(step, sink) ? Outcome::end : Outcome::stopped;
  }
  double beyond = std::max((meeting.y - arc.place().y).norm(), 1e-4);
  if (ahead > 0) beyond = std::min(beyond, (end_ - meeting.fraction) / ahead);
  if (!arc.cross(meeting, beyond, end_, step)) return Outcome::lost;
  const Node before = step.begin;
  const Node after = step.end;
  if (!emit_crossing(step, sink)) return Outcome::stopped;
  const std::string signs_after = context_.branches.signs(after.q);
  if (signs_after != signs_) sink.flip(meeting.fraction, before, after);
  signs_ = signs_after;
  return Outcome::calm;
}

/// Steps that follow the task as far as the arm can at (nearly) singular configurations: the directions lost
/// are left out, and the pose is met all the same, or the place is lost. Nothing is proven here.
template <int N>
typename SegmentFollower<N>::Outcome SegmentFollower<N>::follow_damped(State& state, TrackSink& sink) {
  using Matrix = Eigen::Matrix<double, Eigen::Dynamic, Eigen::Dynamic, 0, max_joints, max_joints>;
  const auto truncated_step = [&](const TaskState<Eigen::Dynamic>& at, const auto& right_side) {
    const Eigen::JacobiSVD<Matrix> svd(Matrix(at.jacobian), Eigen::ComputeThinU | Eigen::ComputeThinV);
    JointVector out = JointVector::Zero(general_.joints());
    for (Eigen::Index k = 0; k < svd.singularValues().size(); ++k) {
      if (svd.singularValues()[k] > truncated)
        out += svd.matrixV().col(k) * (svd.matrixU().col(k).dot(right_side) / svd.singularValues()[k]);
    }
    return out;
  };
  TaskState<Eigen::Dynamic> here;
  here.q = state.q;
  here.fraction = state.fraction;
  general_.evaluate(piece_, here);
  here.rate = truncated_step(here, general_.target_rate(here));
  double h = 0.25 * spacing_;
  while (here.fraction < end_) {
    TaskState<Eigen::Dynamic> next = here;
    next.fraction = here.fraction + h > end_ - 1e-3 * h ? end_ : here.fraction + h;
    const double length = next.fraction - here.fraction;
    next.q += length * general_.scale().cwiseProduct(here.rate);
    bool met = false;
    for (int i = 0; i < 20 && !met; ++i) {
      general_.evaluate(piece_, next);
      const JointVector change = truncated_step(next, next.error);
      if (!(change.norm() < 0.1)) break;
      next.q += general_.scale().cwiseProduct(change);
      met = change.norm() < 1e-10;
    }
    general_.evaluate(piece_, next);
    const double position = next.error.head<3>().norm() * context_.chain.characteristic_length();
    const double orientation = next.error.size() > 3 ? next.error.tail(next.error.size() - 3).norm() : 0.0;
    if (!met || position > position_tolerance || orientation > orientation_tolerance) {
      h *= 0.5;
      if (h < 1e-10) {
        adopt(state, here.fraction, here.q);
        return Outcome::lost;
      }
      continue;
    }
    next.rate = truncated_step(next, general_.target_rate(next));
    Step step;
    step.kind = Step::Kind::interpolated;
    step.piece = piece_;
    step.length = length;
    for (auto [node, from] : {std::pair{&step.begin, &here}, std::pair{&step.end, &next}}) {
      node->fraction = from->fraction;
      node->q = from->q;
      node->rate = general_.scale().cwiseProduct(from->rate);
      node->rate_rate = general_.scale().cwiseProduct(JointVector((next.rate - here.rate) / length));
    }
    if (!sink.step(step, position, orientation)) return Outcome::stopped;
    here = next;
    h = std::min(2 * h, 0.25 * spacing_);
    State calm;
    adopt(calm, here.fraction, here.q);
    if (here.fraction < end_ && regular(calm) && largest_change(calm.q, here.q, task_.scale()) < 1e-6) {
      state = calm;
      return Outcome::calm;
    }
  }
  adopt(state, end_, here.q);
  return Outcome::end;
}

/// From an exactly singular begin: which solutions does the motion ask for just ahead? The nearest continues
/// smoothly, or is where the arm would have to jump.
template <int N>
typename SegmentFollower<N>::Outcome SegmentFollower<N>::restart(State& state, TrackSink& sink) {
  const double speed = scaled_speed(state.fraction);
  const JointVector from = state.q;
  const double begin = state.fraction;
  if (!(speed > 0)) {
    state.error = TaskColumn<N>::Zero(task_.rows());
    return follow_damped(state, sink);
  }
  const double ahead = std::min(restart_length / speed, 0.5 * (end_ - begin));
  std::vector<JointVector> found = context_.finder.find(pose_at(begin + ahead), context_.orientation).joints;
  std::vector<JointVector> near;
  for (const JointVector& q : found) {
    const JointVector turned = turned_towards(context_.arm, q, from);
    if (largest_change(turned, from, task_.scale()) < fold_reach) near.push_back(turned);
  }
  JointVector chosen;
  if (!near.empty()) {
    std::vector<JointVector> same;
    for (const JointVector& q : near) {
      if (context_.branches.signs(q) == signs_) same.push_back(q);
    }
    const std::vector<JointVector>& pool = same.empty() ? near : same;
    chosen = pool[*nearest(context_.arm, from, pool)];
  } else if (const auto target = jump_target(context_.arm, from, found)) {
    chosen = *target;
  } else {
    return Outcome::lost;
  }
  if (!near.empty() && task_.joints() <= task_.rows()) {
    // At a fold the curve itself is smooth by arc length: follow it towards the chosen solution.
    ArcTracker arc(general_, piece_);
    ArcTracker::Unknowns sense = ArcTracker::Unknowns::Zero(task_.joints() + 1);
    sense.head(task_.joints()) = (chosen - from).cwiseQuotient(task_.scale());
    arc.start(begin, from, sense);
    const double rate = arc.unit() * arc.place().tangent[task_.joints()] * speed;
    // Along a fold the fraction grows with the square of the arc; along a self-motion it stands still.
    const double bent = arc.place().curvature[task_.joints()];
    if (arc.place().regularity > 1e-2 && std::abs(rate) < 0.1 && bent > 1e-3 &&
        std::abs(arc.place().tangent.dot(sense)) > 0.9 * sense.norm()) {
      state.q = from;
      return follow_arc(state, sense, sink);
    }
  }
  State next;
  adopt(next, begin + ahead, chosen);
  if (!converge(next)) {
    state.q = from;
    return follow_damped(state, sink);
  }
  JointVector at_begin = next.q;
  at_begin -= task_.scale().cwiseProduct(ahead * (next.rate - 0.5 * ahead * next.rate_rate));
  const std::string signs_after = context_.branches.signs(next.q);
  Step step;
  step.kind = Step::Kind::interpolated;
  step.piece = piece_;
  step.length = ahead;
  step.end = node(next);
  step.begin = step.end;
  step.begin.fraction = begin;
  step.begin.q = at_begin;
  step.begin.rate = step.end.rate - ahead * step.end.rate_rate;
  step.proven = true;
  step.rate_bound = next.rate.norm();
  const bool continuous = largest_change(at_begin, from, task_.scale()) < continuous_reach;
  if (!continuous) sink.jump(begin, from, at_begin);
  if (continuous && signs_after != signs_ && !signs_.empty()) sink.flip(begin, step.begin, step.end);
  signs_ = signs_after;
  if (!emit(step, next, sink)) return Outcome::stopped;
  state = next;
  task_.bound_bend(state);
  return affordable(state) >= least_share * spacing_ ? Outcome::calm : Outcome::singular;
}

/// The configuration at `fraction` that continues the solution `target` found a little ahead of it.
template <int N>
bool SegmentFollower<N>::land(double fraction, double ahead, const JointVector& target, State& landed) const {
  State next;
  adopt(next, fraction + ahead, target);
  if (!converge(next)) return false;
  adopt(landed, fraction, JointVector(next.q - task_.scale().cwiseProduct(ahead * next.rate)));
  return converge(landed);
}

/// Where the branch ends: jump to a solution that is left, or go on from where the pose comes back into
/// reach.
template <int N>
typename SegmentFollower<N>::Outcome SegmentFollower<N>::recover(State& state,
                                                                 std::optional<ArcTracker::Unknowns>& sense,
                                                                 TrackSink& sink) {
  const JointVector left = state.q;
  const double from = state.fraction;
  const double speed = scaled_speed(from);
  const double ahead = speed > 0 ? std::min(probe_length / speed, 0.5 * (end_ - from)) : 0.0;
  const auto solutions = [&](double fraction) {
    return context_.finder.find(pose_at(fraction), context_.orientation).joints;
  };
  // Beside another singularity the solutions turn fast: looked at nearer by, they are found again at the
  // place itself.
  for (double near = ahead; near >= nearest_probe * ahead && (from + near < end_ || ahead == 0);
       near *= 0.1) {
    const auto target = jump_target(context_.arm, left, solutions(from + near));
    if (!target) break;
    State landed;
    if (land(from, near, *target, landed)) {
      if (lost_) {
        sink.regained(from, landed.q);
      } else {
        sink.jump(from, left, landed.q);
      }
      lost_ = false;
      signs_ = context_.branches.signs(landed.q);
      state = landed;
      task_.bound_bend(state);
      return affordable(state) >= least_share * spacing_ ? Outcome::calm : Outcome::singular;
    }
    if (ahead == 0) break;
  }
  if (!lost_) sink.lost(from, left);
  lost_ = true;
  double unreached = from;
  while (unreached < end_) {
    const double next = std::min(end_, unreached + spacing_);
    if (!solutions(next).empty()) {
      if (back_in_reach(state, from, unreached, next, left, sense)) {
        sink.regained(state.fraction, state.q);
        lost_ = false;
        return Outcome::singular;
      }
    }
    unreached = next;
  }
  adopt(state, end_, left);
  return Outcome::end;
}

template <int N>
bool SegmentFollower<N>::back_in_reach(State& state, double lost_at, double unreached, double reached,
                                       const JointVector& left, std::optional<ArcTracker::Unknowns>& sense) {
  const auto solutions = [&](double fraction) {
    return context_.finder.find(pose_at(fraction), context_.orientation).joints;
  };
  const double upper = reached;
  while (reached - unreached > 1e-12) {
    const double middle = 0.5 * (unreached + reached);
    if (middle <= unreached || middle >= reached) break;
    (solutions(middle).empty() ? unreached : reached) = middle;
  }
  // A little further on the two solutions born at the fold have parted.
  const double speed = scaled_speed(reached);
  const double ahead = std::min(speed > 0 ? probe_length / speed : 0.0, 0.5 * (upper - reached));
  std::vector<JointVector> found = solutions(reached + ahead);
  for (JointVector& q : found) q = turned_towards(context_.arm, q, left);
  const auto first = nearest(context_.arm, left, found);
  if (!first) return false;
  const JointVector chosen = found[*first];
  State next;
  adopt(next, reached + ahead, chosen);
  if (!converge(next)) return false;
  if (task_.joints() <= task_.rows()) {
    // Back along the curve to the fold it was born in: the exact place where the pose comes into reach.
    ArcTracker arc(general_, piece_);
    arc.start(next.fraction, next.q, true);
    Step step;
    for (int i = 0; i < 2000 && arc.place().task.fraction > unreached - 10 * ahead; ++i) {
      if (!arc.advance(1.0, step)) break;
      if (step.end.fraction_rate < 0) continue;
      const double t = root(
          [&](double at) {
            Node node;
            arc.at(step, at, node);
            return node.fraction_rate;
          },
          step.length, step.begin.fraction_rate, step.end.fraction_rate);
      Node fold;
      arc.at(step, t, fold);
      if (fold.fraction < std::max(lost_at, unreached - 10 * ahead)) break;
      ArcTracker::Unknowns onwards(task_.joints() + 1);
      onwards.head(task_.joints()) = fold.rate.cwiseQuotient(task_.scale());
      onwards[task_.joints()] = 0;
      // Two solutions are born there: the one we came from, and the one that the curve leads on to.
      ArcTracker other(general_, piece_);
      other.start(fold.fraction, fold.q, onwards);
      for (int k = 0; k < 2000 && other.place().task.fraction < next.fraction; ++k) {
        if (!other.advance(1.0, step)) break;
      }
      const JointVector twin = other.place().task.q;
      const std::string signs_here = context_.branches.signs(next.q);
      const std::string signs_there = context_.branches.signs(twin);
      const bool here_kept = signs_here == signs_;
      const bool there_kept = signs_there == signs_;
      const bool there = here_kept == there_kept ? std::lexicographical_compare(twin.begin(), twin.end(),
                                                                                next.q.begin(), next.q.end())
                                                 : there_kept;
      sense = there ? onwards : ArcTracker::Unknowns(-onwards);
      signs_ = there ? signs_there : signs_here;
      adopt(state, fold.fraction, fold.q);
      return true;
    }
  }
  signs_ = context_.branches.signs(next.q);
  adopt(state, reached, JointVector(next.q - task_.scale().cwiseProduct(ahead * next.rate)));
  if (!converge(state)) state = next;
  return true;
}

template class SegmentFollower<6>;
template class SegmentFollower<Eigen::Dynamic>;

}  // namespace pathvet
