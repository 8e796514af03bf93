#pragma once

#include <functional>
#include <vector>

#include "pathvet/checks/finding.hpp"
#include "pathvet/checks/result.hpp"
#include "reference_track.hpp"

namespace pathvet::test {

/// What the reference expects to be flagged on one track.
struct Expected {
  Code code = Code::unproven;
  int axis = -1;
  double begin = 0, end = 0, peak = 0;
  double value = 0;        ///< as a finding's
  bool unbounded = false;  ///< ends where the track is stuck, with a rate that grows there
  bool ambiguous = false;  ///< it only just happens: its being flagged hangs on rounding
};

/// What one axis does on a track.
struct Motions {
  double min = 0, max = 0, travel = 0, peak_ratio = 0;
};

struct Events {
  std::vector<Expected> findings;
  std::vector<Motions> axes;  ///< joints, then combined limits
  double least_singular = 0;
};

/// All limits, margins, speeds and singular passes of a track, margins beside their errors left out.
[[nodiscard]] Events events(const ReferenceArm& arm, const ReferenceMotion& motion, const Track& track,
                            const CheckOptions& options);

}  // namespace pathvet::test
