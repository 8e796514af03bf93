#pragma once

#include "pathvet/reporting/curves.hpp"
#include "reporting/json_values.hpp"

namespace pathvet::reporting {

/// A path's curves in the units of reports, numbers as base64 of little-endian 32-bit (time and length:
/// 64-bit) floats. Where the path is out of reach, rows without values stand at both ends and at the worst
/// place.
[[nodiscard]] Json curves_json(const PathResult& path, PathCurves curves);

}  // namespace pathvet::reporting
