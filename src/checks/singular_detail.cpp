#include "singular_detail.hpp"

#include <cmath>

#include "pathvet/kinematics/singular_values.hpp"

namespace pathvet {

SingularDetail singular_detail(const ArmContext& context, const JointVector& q) {
  SingularDetail out;
  const SingularDirection direction = smallest_singular_direction(context.chain, q, context.orientation);
  out.smallest_singular_value = direction.value;
  out.runaway = direction.joints;
  out.lost_motion = direction.motion;
  if (context.branches.kind() != BranchAnalysis::Kind::factored) return out;
  // Each factor is free of units: lengths over the characteristic length, the wrist's the sine of its bend.
  // The one nearest to zero names the singularity.
  const std::array<double, 3> factors = context.branches.factors(q);
  int least = 0;
  for (int i = 1; i < 3; ++i) {
    if (std::abs(factors[static_cast<std::size_t>(i)]) < std::abs(factors[static_cast<std::size_t>(least)]))
      least = i;
  }
  const double factor = std::abs(factors[static_cast<std::size_t>(least)]);
  if (least == 0) {
    out.kind = SingularKind::shoulder;
    out.nearness = factor * context.chain.characteristic_length();
    out.nearness_quantity = Quantity::length;
  } else if (least == 2) {
    out.kind = SingularKind::wrist;
    out.nearness = std::asin(std::min(1.0, factor));
    out.nearness_quantity = Quantity::angle;
  } else {
    out.kind = SingularKind::elbow;
  }
  return out;
}

}  // namespace pathvet
