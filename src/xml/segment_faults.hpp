#pragma once

#include <optional>
#include <string>

#include "pathvet/model/path.hpp"
#include "pathvet/model/units.hpp"

namespace pathvet::xml {

/// Two points of an arc that are nearer than this are one (mm).
inline constexpr double coincident_distance = 1e-6;
/// The three points of an arc are on a line if the sine of the largest angle between two sides is below this.
inline constexpr double collinear_sine = 1e-9;
/// A turn that misses 180° by less than this (rad) has no short way.
inline constexpr double half_turn_tolerance = 1e-6 * radians_per_degree;

/// Why no circle runs from `start` through `via` to `end`; nothing if one does.
[[nodiscard]] std::optional<std::string> arc_problem(const Vector3& start, const Vector3& via,
                                                     const Vector3& end);

/// Whether one rotation leads to the other by 180°, within the tolerance.
[[nodiscard]] bool is_half_turn(const Matrix3& from, const Matrix3& to);

}  // namespace pathvet::xml
