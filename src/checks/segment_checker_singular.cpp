#include <boost/math/tools/minima.hpp>
#include <cmath>
#include <functional>

#include "pathvet/kinematics/singular_values.hpp"
#include "segment_checker.hpp"

// The smallest singular value along a segment: stretches below the threshold, and the lowest of all.

namespace pathvet {
namespace {

constexpr int singular_halvings = 7;
constexpr int minimum_bits = 26;  // half of a double's: a minimum's place is not known better

}  // namespace

double SegmentChecker::singular_value(const JointVector& q) const {
  return smallest_singular_value(context_.arm.chain, q, context_.arm.orientation);
}

void SegmentChecker::check_singular(const Step& step) {
  const double threshold = context_.cartesian ? singular_.level : 0.0;
  const bool by_fraction = step.kind == Step::Kind::fraction;
  const double slack = 0.5 * step.singular_slope * step.length;
  const double low = 0.5 * (step.begin.singular_low + step.end.singular_low) - slack;
  const double so_far = min_singular_.value_or(std::numeric_limits<double>::infinity());
  const bool pass_possible = singular_.open || !by_fraction || low < threshold;
  if (!pass_possible && std::min(step.begin.singular_low, step.end.singular_low) > so_far && !falling_) {
    singular_at_begin_.reset();
    return;
  }
  const double at_begin = singular_at_begin_ ? *singular_at_begin_ : singular_value(step.begin.q);
  const auto from_inverse = step.end_inverse ? smallest_singular_value(*step.end_inverse) : std::nullopt;
  const double at_end = from_inverse ? *from_inverse : singular_value(step.end.q);
  singular_at_begin_ = at_end;
  if (pass_possible && threshold > 0) {
    const auto value = [&](const Spot& s) { return threshold - singular_value(s.node.q); };
    // Crossings by halving against the slope's bound: singular values are continuous, but not smooth where
    // they cross.
    std::vector<Spot> spots;
    const std::function<void(const Spot&, double, const Spot&, double, int)> search =
        [&](const Spot& a, double va, const Spot& b, double vb, int depth) {
          const double span = b.t - a.t;
          if ((va > 0) != (vb > 0)) {
            spots.push_back(root_between(sampler_, step, a, b, value));
            return;
          }
          const double bound =
              std::isfinite(step.singular_slope) ? step.singular_slope : 4.0 / step.length * threshold;
          if (std::abs(va) + std::abs(vb) > bound * span || depth >= singular_halvings) return;
          Spot middle{a.t + 0.5 * span, {}};
          sampler_.at(step, middle.t, middle.node);
          const double vm = value(middle);
          search(a, va, middle, vm, depth + 1);
          search(middle, vm, b, vb, depth + 1);
        };
    const Spot begin{0, step.begin};
    const Spot end{step.length, step.end};
    const double vb = threshold - at_begin;
    const double ve = threshold - at_end;
    search(begin, vb, end, ve, 0);
    spots.push_back(end);
    bool offending = spots.size() % 2 == 1 ? std::max(vb, ve) > 0 : vb > 0;
    Spot from = begin;
    for (std::size_t i = 0; i < spots.size(); ++i) {
      const Spot& to = spots[i];
      if (offending) {
        if (!singular_.open) open(singular_, from.node);
        widen(singular_, from.node, i == 0 ? -at_begin : -threshold);
        widen(singular_, to.node, i + 1 == spots.size() ? -at_end : -threshold);
        if (i + 1 < spots.size()) close(singular_, to.node.fraction);
      } else if (singular_.open) {
        close(singular_, from.node.fraction);
      }
      offending = !offending;
      from = to;
    }
  }
  lowest_singular(step, at_begin, at_end);
}

/// Keeps the lowest singular value, refined between the nodes where a node is lower than both neighbours.
void SegmentChecker::lowest_singular(const Step& step, double at_begin, double at_end) {
  const auto take = [&](const Node& node, double value) {
    if (!min_singular_ || value < *min_singular_) min_singular_ = value;
    if (singular_.open) widen(singular_, node, -value);
  };
  const auto refine = [&](const Step& within) {
    Node node;
    const auto value = [&](double t) {
      sampler_.at(within, t, node);
      return singular_value(node.q);
    };
    const auto [t, lowest] = boost::math::tools::brent_find_minima(value, 0.0, within.length, minimum_bits);
    sampler_.at(within, t, node);
    take(node, lowest);
    show_extreme(within, node);
  };
  const double so_far = min_singular_.value_or(std::numeric_limits<double>::infinity());
  const double worst = singular_.open ? -singular_.score : so_far;
  if (step.kind == Step::Kind::interpolated) refine(step);
  // The step before fell to its end, this one rises from there: the minimum lies in one of the two.
  if (falling_ && before_ && at_end > at_begin && at_begin <= std::max(so_far, worst) * (1 + 1e-12)) {
    refine(*before_);
    refine(step);
  }
  take(step.begin, at_begin);
  take(step.end, at_end);
  falling_ = at_end < at_begin;
  if (falling_) before_ = step;
}

}  // namespace pathvet
