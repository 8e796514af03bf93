#pragma once

#include <vector>

#include "pathvet/model/arm.hpp"
#include "pathvet/model/path.hpp"

namespace pathvet::detail {

/// The arm without the joints listed (ascending), each standing still at its value.
[[nodiscard]] Arm locked_arm(const Arm& arm, const std::vector<int>& joints,
                             const std::vector<double>& values);

/// Which joints to hold still so that an arm with more joints than bound directions becomes one that is
/// solved exactly: its prismatic joints if that leaves the right number, else (one joint too many) the first
/// joint whose loss leaves a closed form, the third before others. Empty if there is no such choice.
[[nodiscard]] std::vector<int> joints_to_lock(const Arm& arm, const Pose& tool, Orientation orientation);

}  // namespace pathvet::detail
