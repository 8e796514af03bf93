#pragma once

#include <optional>
#include <string>
#include <vector>

#include "pathvet/checks/finding.hpp"
#include "pathvet/model/path.hpp"
#include "pathvet/model/units.hpp"

namespace pathvet {

/// What a check is asked for. Internal units; the defaults are the contract's.
struct CheckOptions {
  double step_length = 1.0;                              ///< mm; samples are at most this far apart
  double step_angle = 0.5 * radians_per_degree;          ///< rad
  double limit_margin_angle = 3.0 * radians_per_degree;  ///< rad
  double limit_margin_length = 10.0;                     ///< mm
  double speed_margin = 0.85;                            ///< share of a joint's speed
  double singular_below = 0.02;                          ///< smallest singular value of the scaled Jacobian
  std::optional<double> reduced_speed;                   ///< mm/s; none: no arm-speed findings
  int threads = 1;

  /// Every fault of these values, in words of the command line; empty if they are usable.
  [[nodiscard]] std::vector<std::string> problems() const;
};

/// A joint, a combined limit or a positioner's joint over the whole path.
struct AxisResult {
  std::string name;
  JointType type = JointType::revolute;
  std::optional<double> lower, upper;  ///< none where it has no position limit
  std::optional<double> speed_limit;
  double min = 0, max = 0;
  double peak_speed = 0;  ///< with sign
  double peak_ratio = 0;  ///< greatest |speed| / limit
  double travel = 0;      ///< sum of |change|
};

struct SegmentResult {
  int index = 0;  ///< counts from 1
  std::string from, to;
  Move move = Move::linear;
  SourcePlace place;    ///< of the waypoint that the segment ends at
  double length = 0;    ///< mm, of the curve really travelled
  double turn = 0;      ///< rad
  double duration = 0;  ///< s, without the dwell
  double dwell = 0;     ///< s, at its end
  long samples = 0;
  std::string branch;     ///< at its begin
  double peak_ratio = 0;  ///< greatest |joint speed| / limit
  int peak_axis = -1;     ///< index into PathResult::axes
  std::optional<double> min_singular_value;
  std::optional<double> limit_margin;  ///< smallest distance to a limit; negative beyond it
  int limit_margin_axis = -1;
  /// Greatest constant programmed speed at which no joint speed is broken: mm/s, rad/s for a turn on the
  /// spot, share (0 to 1) for a joint move. None where nothing bounds it, or no speed holds.
  std::optional<double> highest_speed;
  bool turn_on_the_spot = false;
  double peak_tcp_speed = 0;    ///< mm/s
  double peak_point_speed = 0;  ///< mm/s, of the fastest joint centre
  std::string peak_point;       ///< its name
  std::vector<int> findings;    ///< indices into PathResult::findings
  std::vector<double>
      ratio_profile;  ///< worst speed ratio in equal stretches of the fraction, for a strip in the text
  std::optional<JointVector> drift;  ///< end less begin where the segments before close a loop; none: no loop
};

/// All that is known of one path after a check. Findings are ordered by segment, begin, code, axis.
struct PathResult {
  std::string file, name, cell_file, cell, arm;
  double characteristic_length = 0;  ///< mm
  JointVector start;
  std::string start_branch;
  bool start_taught = true;
  std::vector<AxisResult> axes;  ///< the arm's joints, its combined limits, positioners' joints ("table.T1")
  int joint_count = 0;           ///< how many of `axes` are the arm's joints
  double length = 0, duration = 0;  ///< whole path; duration with dwells
  long samples = 0;
  double proven_fraction = 0;
  double position_residual = 0;     ///< mm, the worst that was left at any sample in reach
  double orientation_residual = 0;  ///< rad
  std::vector<SegmentResult> segments;
  std::vector<Finding> findings;
  std::vector<std::string> notes;  ///< complete sentences for the text report: clamped blends and the like
  bool stopped = false;            ///< the observer asked to stop; the rest is incomplete

  [[nodiscard]] int count(Level wanted) const;
};

}  // namespace pathvet
