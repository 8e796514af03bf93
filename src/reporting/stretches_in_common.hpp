#pragma once

#include <vector>

#include "pathvet/reporting/compare.hpp"

/// Two paths laid side by side at the waypoints that both have.
namespace pathvet::reporting {

/// What a stretch between two common waypoints is long, and where a segment begins in it.
struct SegmentPlace {
  int stretch = 0;
  double before_mm = 0, before_s = 0;
  double whole_mm = 0, whole_s = 0;  ///< of the stretch
};

struct SideBySide {
  std::vector<SegmentPlace> before, after;  ///< one for each segment
  bool has_common_waypoint = false;
};

/// The greatest number of waypoints that stand in the same order in both paths are the common ones.
[[nodiscard]] SideBySide side_by_side(const SavedPath& before, const SavedPath& after);

}  // namespace pathvet::reporting
