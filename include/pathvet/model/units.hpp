#pragma once

/// The one unit system of the code: millimetre, radian, second. Degrees exist only in `xml` (reading) and
/// `reporting` (writing), which convert with the two constants below.

namespace pathvet {

inline constexpr double pi = 3.14159265358979323846;
inline constexpr double radians_per_degree = pi / 180.0;
inline constexpr double degrees_per_radian = 180.0 / pi;

}  // namespace pathvet
