#pragma once

#include <algorithm>

#include "pathvet/tracking/step.hpp"
#include "pathvet/tracking/task.hpp"

namespace pathvet {

/// How far (norm of the scaled variables) the curve may be followed from a place where the inverse of its
/// Jacobian has the norm `inverse_norm` and the Jacobian bends by at most `bend`, so that it provably stays
/// regular and unique: max over r of r (1 - inverse_norm bend r), r at most Bend::radius. Newton-Kantorovich;
/// docs/methods.md, "Proof".
[[nodiscard]] inline double provable_travel(double inverse_norm, double bend) {
  const double r = std::min(0.5 / (inverse_norm * bend), Bend::radius);
  return r * (1.0 - inverse_norm * bend * r);
}

/// Fills a step's bounds and marks it proven. `speed`: bound on the norm of the inverse times the target's
/// rate along the step (at the begin's inverse); `second`, `third`: of the target's derivatives by t;
/// `travel`: length * speed.
inline void prove(Step& step, double inverse_norm, double bend_first, double bend_second, double speed,
                  double second, double third) {
  const double travel = step.length * speed;
  const double r_max = std::min(0.5 / (inverse_norm * bend_first), Bend::radius);
  const double r = travel / (1.0 - inverse_norm * bend_first * r_max);
  const double loss = 1.0 - inverse_norm * bend_first * r;
  const double inverse = inverse_norm / loss;
  const double v = speed / loss;
  step.rate_bound = v;
  step.second_bound = inverse * (bend_first * v * v + second);
  step.third_bound = inverse * (third + 3 * bend_first * v * step.second_bound + bend_second * v * v * v);
  step.singular_slope = bend_first * v;
  step.proven = true;
}

}  // namespace pathvet
