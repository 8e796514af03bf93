#pragma once

#include <memory>
#include <string>

#include "pathvet/kinematics/branches.hpp"
#include "pathvet/kinematics/configurations.hpp"
#include "pathvet/model/units.hpp"
#include "pathvet/motion/segment_motion.hpp"
#include "pathvet/tracking/step.hpp"

namespace pathvet {

/// How far the tracked joints may be from the asked pose (contract, section 5), and how near to a singular
/// configuration a pass counts as exact: a tenth of it.
inline constexpr double position_tolerance = 1e-3;                          // mm
inline constexpr double orientation_tolerance = 1e-4 * radians_per_degree;  // rad
inline constexpr double exact_position = 0.1 * position_tolerance;
inline constexpr double exact_orientation = 0.1 * orientation_tolerance;

/// Receives what a follower finds, in the order of the segment.
class TrackSink {
 public:
  virtual ~TrackSink() = default;
  /// Returns false to stop. `position_residual` mm and `orientation_residual` rad: left at the step's end.
  virtual bool step(const Step& step, double position_residual, double orientation_residual) = 0;
  virtual void flip(double fraction, const Node& before, const Node& after) = 0;
  virtual void jump(double fraction, const JointVector& from, const JointVector& to) = 0;
  /// No configuration reaches the pose from here on.
  virtual void lost(double fraction, const JointVector& last) = 0;
  virtual void regained(double fraction, const JointVector& at) = 0;
};

/// What a follower needs to know of the arm; const and shared by all segments with the same tool and
/// orientation.
struct ArmContext {
  const Arm& arm;
  const Chain& chain;
  const ConfigurationFinder& finder;
  const BranchAnalysis& branches;
  Orientation orientation = Orientation::full;
};

struct FollowSettings {
  double step_length = 1.0;                      ///< mm
  double step_angle = 0.5 * radians_per_degree;  ///< rad
};

/// Follows one Cartesian segment continuously from a configuration: predictor, damped least-squares
/// corrector, proven steps; arc length near singularities; past folds and jumps as the contract says.
class Follower : public StepSampler {
 public:
  struct End {
    JointVector q;
    bool reached = true;  ///< false: the segment's end is out of reach; q is the last configuration that held
    bool stopped = false;
  };
  /// `reached`: whether `q` meets the segment's begin (false: the segment before ended out of reach).
  /// `branch`: the signs of the branch that is followed, in and out: at a singular waypoint the joints alone
  /// can't tell it.
  virtual End run(const JointVector& q, bool reached, std::string& branch, TrackSink& sink) = 0;
};

[[nodiscard]] std::unique_ptr<Follower> make_follower(const ArmContext& context, const SegmentMotion& motion,
                                                      const FollowSettings& settings);

}  // namespace pathvet
