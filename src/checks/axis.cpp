#include "axis.hpp"

namespace pathvet {

std::vector<Axis> axes_of(const Arm& arm) {
  std::vector<Axis> out;
  for (int i = 0; i < arm.joint_count(); ++i) {
    const Joint& joint = arm.joints[static_cast<std::size_t>(i)];
    Axis axis{joint.name, joint.type, {{i, 1.0}}, {}, {}, joint.speed, joint.acceleration};
    if (!joint.continuous) {
      axis.lower = joint.lower;
      axis.upper = joint.upper;
    }
    out.push_back(std::move(axis));
  }
  for (const CombinedLimit& limit : arm.combined_limits) {
    Axis axis{limit.name, limit.type, {}, limit.lower, limit.upper, limit.speed, {}};
    for (const CombinedLimit::Term& term : limit.terms) axis.terms.push_back({term.joint, term.factor});
    out.push_back(std::move(axis));
  }
  return out;
}

}  // namespace pathvet
