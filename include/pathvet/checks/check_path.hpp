#pragma once

#include "pathvet/checks/result.hpp"
#include "pathvet/motion/segment_motion.hpp"
#include "pathvet/tracking/step.hpp"
#include "pathvet/xml/faults.hpp"

namespace pathvet {

class Chain;

/// One sample of a path as it is checked. Internal units; length and time count from the path's start.
struct TraceSample {
  int segment = 0;
  double fraction = 0;
  double length = 0;
  double time = 0;
  const JointVector& joints;
  const JointVector& speeds;  ///< NaN where the rate is unbounded or the pose is out of reach
  double min_singular_value = 0;
  const std::string& branch;
  double position_residual = 0;     ///< mm
  double orientation_residual = 0;  ///< rad
  const Pose& tcp;                  ///< of the TCP in the world
};

/// A segment that is about to be checked; `chain` ends at the segment's TCP.
struct SegmentStart {
  int segment = 0;                        ///< counts from 1
  const SegmentMotion* motion = nullptr;  ///< null: a joint move
  const Chain& chain;
  double duration = 0;  ///< s
};

/// Watches a check as it goes. Called from one thread, in the order of the path.
class CheckObserver {
 public:
  virtual ~CheckObserver() = default;
  /// Whether sample() wants to be called; without it the exact singular value of every sample is not
  /// computed.
  [[nodiscard]] virtual bool wants_samples() const { return false; }
  virtual void sample(const TraceSample& /*sample*/) {}
  /// Places between the samples that the report's figures come from: where a joint's position or speed or the
  /// smallest singular value is extreme on the exact curve, and where the curve begins anew after a gap or a
  /// jump. They come before the sample at the end of their step, in no order; residuals are not given. Called
  /// if wants_samples().
  virtual void extreme(const TraceSample& /*sample*/) {}
  /// Every segment as it begins, then its steps: the pieces of the joints' exact curve, between whose ends
  /// the sampler gives any place. Both are good for the call alone.
  virtual void begin_segment(const SegmentStart& /*start*/) {}
  virtual void step(int /*segment*/, const Step& /*step*/, const StepSampler& /*sampler*/) {}
  /// Share of the path's segments done, 0 to 1. Returns false to stop the check.
  virtual bool progress(double /*share*/) { return true; }
};

/// The main job: tracks the path in the cell from its start and checks it to its end.
/// Faults (in the path file's places) are what only the forward map can tell: a taught configuration that
/// misses its pose, a start pose that no configuration reaches.
[[nodiscard]] Reading<PathResult> check_path(const Path& path, const Cell& cell, const CheckOptions& options,
                                             CheckObserver* observer = nullptr);

}  // namespace pathvet
