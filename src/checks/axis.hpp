#pragma once

#include <cmath>
#include <optional>
#include <string>
#include <vector>

#include "pathvet/checks/result.hpp"
#include "pathvet/model/cell.hpp"
#include "pathvet/tracking/step.hpp"

namespace pathvet {

/// Something with limits that the joints move: a joint, or a combined limit's linear combination of joints.
struct Axis {
  struct Term {
    int joint = 0;
    double factor = 1;
  };
  std::string name;
  JointType type = JointType::revolute;
  std::vector<Term> terms;
  std::optional<double> lower, upper, speed, acceleration;

  [[nodiscard]] double of(const JointVector& joints) const {
    double sum = 0;
    for (const Term& term : terms) sum += term.factor * joints[term.joint];
    return sum;
  }
  /// Turns a bound on the norm of the scaled joints into one on this axis (rad or mm).
  [[nodiscard]] double reach(double characteristic_length) const {
    double sum = 0;
    for (const Term& term : terms) sum += std::abs(term.factor);
    return type == JointType::prismatic ? sum * characteristic_length : sum;
  }
};

/// The arm's joints, then its combined limits.
[[nodiscard]] std::vector<Axis> axes_of(const Arm& arm);

/// A limit is broken when it is exceeded by more than this share of its size; touching is allowed.
inline constexpr double limit_tolerance = 1e-9;
[[nodiscard]] inline double beyond(double limit) {
  return limit_tolerance * std::abs(limit);
}

}  // namespace pathvet
