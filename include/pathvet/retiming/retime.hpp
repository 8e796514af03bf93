#pragma once

#include <cmath>
#include <optional>
#include <string>
#include <vector>

#include "pathvet/retiming/recording.hpp"
#include "pathvet/retiming/stretches.hpp"

namespace pathvet {

struct RetimeOptions {
  int most_cuts = 8;    ///< extra waypoints in a segment; 0: one speed a segment
  double reserve = 0;   ///< share of every limit that is kept free
  bool faster = false;  ///< speeds may rise above the programmed ones
  CheckOptions check;

  [[nodiscard]] std::vector<std::string> problems() const;
};

/// A stretch as it was written. Speeds are in the segment's programmed unit: mm/s, rad/s (turn on the spot),
/// share (joint move).
struct RetimedStretch {
  std::string to;             ///< id of the waypoint that ends it
  double begin = 0, end = 1;  ///< fractions of the segment as it was
  double speed = 0;
  double duration = 0;  ///< s
  int limit = -1;       ///< index into Retiming::limits of what sets the speed; -1: the programmed speed
  double where = 0;     ///< fraction of the segment as it was where it does
};

struct RetimedSegment {
  int index = 0;  ///< counts from 1, in the path as it was
  std::string from, to;
  Move move = Move::linear;
  SourcePlace place;
  bool turn_on_the_spot = false;
  double old_speed = 0;
  double old_duration = 0, new_duration = 0;  ///< s, without dwells
  double bound = 0;      ///< s: least time under speed limits alone (and the programmed speed, unless faster)
  std::string hopeless;  ///< why no speed helps, so that it was left as it was; empty: speeds help
  std::vector<RetimedStretch> stretches;
  [[nodiscard]] bool changed() const;
};

/// A path with speeds that hold, and what they cost.
struct Retiming {
  std::string text;                 ///< of the path file
  PathResult before, after;         ///< checks of what was read and of `text`
  std::vector<std::string> limits;  ///< names of joints, combined limits, positioner joints
  std::vector<RetimedSegment> segments;
  double bound = 0;  ///< s, of the whole path with dwells
  int extra_waypoints = 0;
  bool stopped = false;

  /// How far `after` takes longer than the bound, as a share of the bound.
  [[nodiscard]] double gap() const { return gap(after.duration, bound); }
  [[nodiscard]] static double gap(double now, double least) {
    constexpr double rounding = 1e-12;  // of sums over many segments
    const double share = least > 0 ? now / least - 1 : 0;
    return std::abs(share) < rounding ? 0 : share;
  }
  [[nodiscard]] bool is_flagged() const { return after.count(Level::error) > 0; }
};

/// Finds speeds at which all rate limits hold and writes them into `text`, the path file that `recording` was
/// made from; then checks what it wrote, and lowers a speed further where the check still finds a limit
/// broken. Faults: as parse_path and check_path on the written text (there are none unless this has a
/// defect).
[[nodiscard]] Reading<Retiming> retime(const Recording& recording, const std::string& text, const Path& path,
                                       const Cell& cell, const RetimeOptions& options,
                                       CheckObserver* progress = nullptr);

}  // namespace pathvet
