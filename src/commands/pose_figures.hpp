#pragma once

#include <vector>

#include "pathvet/kinematics/branches.hpp"
#include "pathvet/kinematics/chain.hpp"
#include "pathvet/model/path.hpp"
#include "pathvet/reporting/pose_report.hpp"

namespace pathvet::commands {

/// Works out what is reported of one configuration of an arm with a tool.
class PoseFigures {
 public:
  /// frame: pose of the report's frame in the world.
  PoseFigures(const Arm& arm, const Pose& tool, const Pose& frame, Orientation orientation);

  [[nodiscard]] ConfigurationReport of(const JointVector& joints) const;
  [[nodiscard]] double characteristic_length() const { return chain_.characteristic_length(); }

 private:
  Arm arm_;
  Chain chain_;
  Pose world_from_frame_inverse_;
  Orientation orientation_;
  BranchAnalysis branches_;
};

/// Of the configurations that differ from this one by whole turns, those to show: all inside the limits, or
/// the one of them that is nearest to the middle of the limits. Empty if none is inside.
[[nodiscard]] std::vector<JointVector> variants_inside(const Arm& arm, const JointVector& joints, bool all);

}  // namespace pathvet::commands
