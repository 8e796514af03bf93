#pragma once

#include <boost/math/tools/toms748_solve.hpp>
#include <cmath>
#include <vector>

#include "pathvet/tracking/step.hpp"

// Places on a step where a signal (a smooth function of the node) crosses zero or is extreme, found on the
// exact curve. A signal is given by its value and its derivative by the step's parameter t, both functions of
// a Spot; `bound` is a bound on |second derivative| over the step (infinite where none is known).

namespace pathvet {

/// A node together with its place on the step.
struct Spot {
  double t = 0;
  Node node;
};

inline constexpr int most_halvings = 12;      // of a step whose bound can't decide
inline constexpr int blind_halvings = 3;      // where there is no bound
inline constexpr double slope_noise = 1e-13;  // relative; below it a derivative's sign means nothing

/// Root of `f` (spot to double) between two spots whose values differ in sign.
template <typename F>
Spot root_between(const StepSampler& sampler, const Step& step, const Spot& a, const Spot& b, F f) {
  const double at_a = f(a);
  const double at_b = f(b);
  if (at_a == 0) return a;
  if (at_b == 0) return b;
  Spot spot;
  const auto value = [&](double t) {
    spot.t = t;
    sampler.at(step, t, spot.node);
    return f(spot);
  };
  std::uintmax_t iterations = 80;
  const auto bracket = boost::math::tools::toms748_solve(
      value, a.t, b.t, at_a, at_b, boost::math::tools::eps_tolerance<double>(48), iterations);
  spot.t = 0.5 * (bracket.first + bracket.second);
  sampler.at(step, spot.t, spot.node);
  return spot;
}

/// Where the signal's derivative changes sign between two spots, if it does.
template <typename D>
bool extreme_between(const StepSampler& sampler, const Step& step, const Spot& a, const Spot& b, D slope,
                     Spot& out) {
  const double at_a = slope(a);
  const double at_b = slope(b);
  if (!(at_a * at_b < 0)) return false;
  out = root_between(sampler, step, a, b, slope);
  return true;
}

/// Appends, in order, the spots between a and b where the signal changes sign.
template <typename F, typename D>
void crossings(const StepSampler& sampler, const Step& step, const Spot& a, const Spot& b, F value, D slope,
               double bound, std::vector<Spot>& out, int depth = 0) {
  const double at_a = value(a);
  const double at_b = value(b);
  const double h = b.t - a.t;
  const double slope_a = slope(a);
  const double slope_b = slope(b);
  const bool change = (at_a > 0) != (at_b > 0);
  const bool known = std::isfinite(bound);
  // Between a and b the signal stays within bound h^2 / 8 of its chord; its slope within bound h of either
  // end's.
  if (known && !change && std::min(std::abs(at_a), std::abs(at_b)) > bound * h * h / 8) return;
  const bool monotone = known && std::min(std::abs(slope_a), std::abs(slope_b)) > bound * h;
  const bool deep = depth >= (known ? most_halvings : blind_halvings);
  if (change && (monotone || deep)) {
    out.push_back(root_between(sampler, step, a, b, value));
    return;
  }
  if (!change && monotone) return;
  // An extremum on the way towards zero splits the interval better than its middle.
  const double towards = at_a > 0 ? -1.0 : 1.0;
  Spot middle;
  const bool turns = !change && towards * slope_a > 0 && towards * slope_b < 0;
  if (turns && extreme_between(sampler, step, a, b, slope, middle)) {
    const double at_middle = value(middle);
    const double left = middle.t - a.t;
    const double right = b.t - middle.t;
    if ((at_middle > 0) == (at_a > 0) && (deep || depth > 1)) return;
    if (left > 0 && right > 0) {
      crossings(sampler, step, a, middle, value, slope, bound, out, deep ? depth : depth + 1);
      crossings(sampler, step, middle, b, value, slope, bound, out, deep ? depth : depth + 1);
      return;
    }
  }
  if (deep) return;
  middle.t = a.t + 0.5 * h;
  if (middle.t <= a.t || middle.t >= b.t) return;
  sampler.at(step, middle.t, middle.node);
  crossings(sampler, step, a, middle, value, slope, bound, out, depth + 1);
  crossings(sampler, step, middle, b, value, slope, bound, out, depth + 1);
}

}  // namespace pathvet
