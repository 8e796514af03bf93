#pragma once

#include <optional>
#include <vector>

#include "pathvet/model/arm.hpp"

namespace pathvet {

/// *Nearest* in the sense of the contract: least time. Compares |change| / speed limit: its greatest over the
/// joints, then its sum, then the joint values, first joint first.
[[nodiscard]] bool nearer(const Arm& arm, const JointVector& from, const JointVector& a,
                          const JointVector& b);

/// Greatest over the joints of |to - from| / speed limit, s.
[[nodiscard]] double least_time(const Arm& arm, const JointVector& from, const JointVector& to);

/// Index of the nearest of some configurations; none if there are none.
[[nodiscard]] std::optional<std::size_t> nearest(const Arm& arm, const JointVector& from,
                                                 const std::vector<JointVector>& candidates);

/// The configuration with each revolute joint shifted by whole turns to within half a turn of `reference`,
/// limits left aside.
[[nodiscard]] JointVector turned_towards(const Arm& arm, const JointVector& q, const JointVector& reference);

/// Of the solutions of a pose, the one to jump to from `from`: the nearest that has a whole-turn variant
/// inside the limits, in that variant; if none has, the nearest of all.
[[nodiscard]] std::optional<JointVector> jump_target(const Arm& arm, const JointVector& from,
                                                     const std::vector<JointVector>& solutions);

}  // namespace pathvet
