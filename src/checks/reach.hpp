#pragma once

#include <array>
#include <functional>
#include <optional>
#include <vector>

#include "pathvet/tracking/follower.hpp"

namespace pathvet {

/// By how much an arm misses a pose (contract, section 6, `out-of-reach`).
struct Miss {
  double fraction = 0;
  JointVector joints;
  double position = 0;             ///< mm
  double orientation = 0;          ///< rad
  bool holds_orientation = false;  ///< the asked orientation is held, `position` is the least miss under that
  bool holds_position =
      false;  ///< it can't be, but the position is, and `orientation` is the least miss then
};

/// The least miss of one pose: position with the orientation held; else orientation with the position held;
/// else least squares of both (position over the characteristic length). Damped least squares from several
/// starts.
[[nodiscard]] Miss least_miss(const ArmContext& context, const Pose& target, const JointVector& start);

/// The greatest of the least misses between two fractions.
[[nodiscard]] Miss worst_miss(const ArmContext& context, const std::function<Pose(double)>& target,
                              double from, double to, const JointVector& start);

}  // namespace pathvet
