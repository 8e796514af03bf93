#pragma once

#include <string>
#include <string_view>
#include <vector>

#include "pathvet/checks/result.hpp"

/// Pieces of sentences that messages, remedies and tables share.
namespace pathvet::reporting {

[[nodiscard]] const SegmentResult& segment_of(const PathResult& path, const Finding& finding);
/// The axis that the finding names; precondition: finding.axis >= 0.
[[nodiscard]] const AxisResult& axis_of(const PathResult& path, const Finding& finding);
/// The joint's name, or "" where the finding names none.
[[nodiscard]] std::string axis_name(const PathResult& path, int axis);

/// A joint's position with its unit.
[[nodiscard]] std::string position_amount(const AxisResult& axis, double value);

/// "upper limit" or "lower limit": the one that a limit-margin finding comes near.
struct NearLimit {
  const char* side;
  double value;
};
[[nodiscard]] NearLimit near_limit(const PathResult& path, const Finding& finding);

/// What a segment's programmed speed is counted in: mm/s, deg/s for a turn on the spot, percent for a joint
/// move.
[[nodiscard]] double to_programmed_unit(const SegmentResult& segment, double value);
[[nodiscard]] const char* programmed_unit(const SegmentResult& segment);
/// The attribute of the path file that sets it: "speed", "turn-rate", "joint-rate".
[[nodiscard]] const char* programmed_attribute(const SegmentResult& segment);

/// The joints whose share of a singularity's runaway motion is at least `least`, greatest first; the shares
/// (squares of the singular vector's components) add up to 1 over all joints.
struct Share {
  int joint;
  double share;
};
[[nodiscard]] std::vector<Share> runaway_shares(const JointVector& runaway, double least);

/// The singular pass that this finding overlaps on its segment; null if there is none.
[[nodiscard]] const Finding* singular_pass_at(const PathResult& path, const Finding& finding);

/// "a, b and c".
[[nodiscard]] std::string listed(const std::vector<std::string>& words);

/// "1 error", "2 errors".
[[nodiscard]] std::string counted(long count, std::string_view word);

}  // namespace pathvet::reporting
