#pragma once

#include "segment_checker.hpp"

namespace pathvet {

/// The joints of all positioners of a cell, in order, as axes named "table.T1"; the terms index into the
/// joints of all positioners laid end to end.
[[nodiscard]] std::vector<Axis> positioner_axes(const Cell& cell);
[[nodiscard]] JointVector positioner_joints(const Waypoint& waypoint);

/// Limits, margins and speeds of positioner joints over one segment, in closed form: they go evenly.
/// `axis_offset` is added to the axes' indices; findings carry the arm's configurations at the segment's
/// ends.
void check_positioners(SegmentChecker& checker, const SegmentContext& context, const std::vector<Axis>& axes,
                       int axis_offset, const JointVector& from, const JointVector& to,
                       const JointVector& arm_from, const JointVector& arm_to,
                       std::vector<AxisTally>& tallies);

}  // namespace pathvet
