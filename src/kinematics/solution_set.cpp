#include "kinematics/solution_set.hpp"

#include <algorithm>
#include <cmath>

#include "kinematics/circle_equations.hpp"
#include "pathvet/model/units.hpp"

namespace pathvet::detail {

namespace {

/// What a configuration may miss the pose by: share of the characteristic length, and rad.
constexpr double exact_position = 1e-9;
constexpr double exact_rotation = 1e-9;
/// An arm with fewer joints than bound directions meets a pose written with finitely many digits only nearly:
/// there the tracking tolerance (mm, rad) counts.
constexpr double tracking_position = 1e-3;
constexpr double tracking_rotation = 1e-4 * radians_per_degree;
/// A candidate that misses by less needs no polishing.
constexpr double good_enough = 1e-12;
/// Nearer than this (rad, or share of the characteristic length) two candidates are one for certain ...
constexpr double same_distance = 1e-9;
/// ... and up to this they are if the configuration half way meets the pose as well as they do, but for
/// `merge_gain`: a double solution, met from two sides.
constexpr double merge_distance = 1e-3;
constexpr double merge_gain = 1e-11;
/// Sorted values nearer than this count as one: their order is left to the next joint.
constexpr double sort_gap = 1e-9;
/// -pi and pi are one angle: what is nearer than this to -pi is given as pi.
constexpr double seam = 1e-12;

using Iterator = std::vector<const JointVector*>::iterator;

void sort_by(Eigen::Index joint, Iterator begin, Iterator end) {
  if (end - begin < 2 || joint == (*begin)->size()) return;
  std::sort(begin, end, [joint](const auto* a, const auto* b) { return (*a)[joint] < (*b)[joint]; });
  for (Iterator from = begin; from != end;) {
    Iterator to = from + 1;
    while (to != end && (**to)[joint] - (**(to - 1))[joint] <= sort_gap) ++to;
    sort_by(joint + 1, from, to);
    from = to;
  }
}

}  // namespace

SolutionSet::SolutionSet(const Chain& chain, Orientation orientation, const Pose& target)
    : chain_(&chain), solver_(chain, orientation), target_(target) {
  const bool overdetermined = chain.joint_count() < bound_rows(orientation);
  position_limit_ = overdetermined ? tracking_position / chain.characteristic_length() : exact_position;
  rotation_limit_ = overdetermined ? tracking_rotation : exact_rotation;
}

bool SolutionSet::meets(const Miss& miss) const {
  return miss.within(position_limit_, rotation_limit_);
}

bool SolutionSet::offer(JointVector candidate, int most_steps) {
  Miss miss = solver_.miss(target_, candidate);
  if (!miss.within(good_enough, good_enough)) miss = solver_.solve(target_, candidate, most_steps);
  if (!meets(miss)) return false;
  wrap(candidate);
  for (JointVector& other : found_) {
    const double apart = distance(candidate, other);
    if (apart <= same_distance) return false;
    if (apart <= merge_distance && merge(candidate, miss, other)) return false;
  }
  found_.push_back(candidate);
  return true;
}

/// If the two are one, `kept` becomes the one half way, or whichever of them meets the pose best.
bool SolutionSet::merge(const JointVector& candidate, const Miss& miss, JointVector& kept) const {
  const double kept_miss = std::sqrt(solver_.miss(target_, kept).squared());
  const double candidate_miss = std::sqrt(miss.squared());
  JointVector between = middle(candidate, kept);
  const double between_miss = std::sqrt(solver_.miss(target_, between).squared());
  if (between_miss > std::max(kept_miss, candidate_miss) + merge_gain) return false;
  const double best = std::min(kept_miss, candidate_miss);
  if (between_miss <= best + merge_gain) {
    wrap(between);
    kept = between;
  } else if (candidate_miss < kept_miss) {
    kept = candidate;
  }
  return true;
}

bool SolutionSet::any_singular() const {
  return std::any_of(found_.begin(), found_.end(),
                     [&](const JointVector& q) { return solver_.rank(target_, q) < chain_->joint_count(); });
}

std::vector<JointVector> SolutionSet::sorted() const {
  std::vector<const JointVector*> order;
  order.reserve(found_.size());
  for (const JointVector& q : found_) order.push_back(&q);
  sort_by(0, order.begin(), order.end());
  std::vector<JointVector> out;
  out.reserve(order.size());
  for (const JointVector* q : order) out.push_back(*q);
  return out;
}

void SolutionSet::wrap(JointVector& q) const {
  for (int i = 0; i < chain_->joint_count(); ++i) {
    if (!chain_->is_revolute(i)) continue;
    q[i] = wrap_angle(q[i]);
    if (q[i] < -pi + seam) q[i] = pi;
  }
}

double SolutionSet::distance(const JointVector& a, const JointVector& b) const {
  double most = 0;
  for (int i = 0; i < chain_->joint_count(); ++i) {
    const double change = b[i] - a[i];
    most = std::max(most, std::abs(chain_->is_revolute(i) ? wrap_angle(change)
                                                          : change / chain_->characteristic_length()));
  }
  return most;
}

JointVector SolutionSet::middle(const JointVector& a, const JointVector& b) const {
  JointVector out = a;
  for (int i = 0; i < chain_->joint_count(); ++i) {
    out[i] += 0.5 * (chain_->is_revolute(i) ? wrap_angle(b[i] - a[i]) : b[i] - a[i]);
  }
  return out;
}

}  // namespace pathvet::detail
