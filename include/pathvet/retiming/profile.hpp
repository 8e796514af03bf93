#pragma once

#include <string>
#include <vector>

#include "pathvet/retiming/recording.hpp"

namespace pathvet {

struct ProfileOptions {
  double reserve = 0;   ///< share of every limit that is kept free
  bool faster = false;  ///< the programmed speed is no ceiling
  int finer = 1;        ///< grid intervals are cut in so many
};

/// A grid point of the profile. Internal units.
struct ProfilePoint {
  int segment = 0;
  double fraction = 0;
  double time = 0;       ///< s from the path's start
  double rate = 0;       ///< of the fraction, 1/s
  double tcp_speed = 0;  ///< mm/s, in the waypoint's frame
  JointVector joints, speeds, accelerations;
};

/// The time-optimal speed along a path.
struct Profile {
  std::vector<ProfilePoint> points;
  std::vector<double> durations;  ///< s, of each segment; of one on which no speed helps, as programmed
  double duration = 0;            ///< s, of the path with its dwells
  long grid_points = 0;
  std::vector<std::string> notes;  ///< complete sentences
};

/// Under the speed and acceleration limits of the cell and, unless `faster`, the programmed speed as ceiling;
/// at rest at the begin and end and where the joints' direction changes at a waypoint. Segments on which no
/// speed helps are left out, at rest beside them. docs/retiming.md, "Time-optimal profile".
[[nodiscard]] Profile time_optimal_profile(const Recording& recording, const Path& path, const Cell& cell,
                                           const ProfileOptions& options);

}  // namespace pathvet
