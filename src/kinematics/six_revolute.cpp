#include "kinematics/six_revolute.hpp"

#include <algorithm>

namespace pathvet::detail {

SixRevolute::SixRevolute(const ScrewAxes& axes) : home_(axes.home) {
  const ScrewAxes backwards = axes.reversed();
  for (const bool reverse : {false, true}) {
    const ScrewAxes& seen = reverse ? backwards : axes;
    if (auto wrist = SphericalWrist::detect(seen)) {
      method_ = *wrist;
    } else if (auto parallel = ThreeParallel::detect(seen)) {
      method_ = *parallel;
    } else {
      continue;
    }
    reversed_ = reverse;
    return;
  }
  method_.emplace<Elimination>(axes);
}

bool SixRevolute::solve(const Pose& target, std::vector<SixAngles>& out) const {
  const Pose motion = reversed_ ? target.inverse() * home_ : target * home_.inverse();
  const bool all = std::visit(
      [&](const auto& method) {
        if constexpr (std::is_same_v<decltype(method), const std::monostate&>) {
          return false;
        } else {
          return method.solve(motion, out);
        }
      },
      method_);
  if (reversed_) {
    for (SixAngles& candidate : out) std::reverse(candidate.q.begin(), candidate.q.end());
  }
  return all;
}

}  // namespace pathvet::detail
