#pragma once

#include "pathvet/retiming/retime.hpp"

namespace pathvet {

/// What a segment is to be run at.
struct SegmentPlan {
  std::vector<Stretch> stretches;  ///< empty: left as it is
  double floor = 0;                ///< density of the programmed speed
  double bound = 0;                ///< s

  /// Whether the stretch keeps the programmed speed.
  [[nodiscard]] bool keeps(const Stretch& stretch) const { return stretch.limit < 0; }
};

/// Speeds for every segment, corners minded.
[[nodiscard]] std::vector<SegmentPlan> plan_speeds(const Recording& recording, const Path& path,
                                                   const std::vector<RateLimit>& limits,
                                                   const RetimeOptions& options);

/// The path's text with the planned speeds in it. `ids` receives, for each segment, the ids of its stretches'
/// ends.
[[nodiscard]] std::string write_plan(const Recording& recording, const std::string& text, const Path& path,
                                     const Cell& cell, const std::vector<SegmentPlan>& plans,
                                     std::vector<std::vector<std::string>>& ids);

/// The speed of a stretch in its segment's programmed unit, before it is rounded for the file.
[[nodiscard]] double planned_speed(const RecordedSegment& segment, const Waypoint& waypoint, double density);

/// Where a fraction lies on a segment's leg (0 to 1), and back. Precondition: it lies on the leg, not in a
/// corner.
[[nodiscard]] double leg_parameter(const SegmentMotion& motion, double fraction);
[[nodiscard]] double leg_fraction(const SegmentMotion& motion, double parameter);

}  // namespace pathvet
