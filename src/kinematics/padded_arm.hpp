#pragma once

#include <optional>

#include "kinematics/six_revolute.hpp"
#include "kinematics/solution_set.hpp"
#include "pathvet/model/path.hpp"

namespace pathvet::detail {

/// Arms of revolute joints, with no more joints than bound directions, solved as arms of exactly six joints
/// (position alone: three). What is missing is padded behind the TCP: where the turn about the tool's z axis
/// doesn't bind, a joint about it; beyond that joints on axes of no meaning, which at every solution stand at
/// zero. So what finds all configurations of the padded arm finds all of the arm.
class PaddedArm {
 public:
  /// None for arms with a prismatic joint, with more joints than bound directions, or (position alone) where
  /// every configuration is singular.
  [[nodiscard]] static std::optional<PaddedArm> make(const Arm& arm, const Pose& tool,
                                                     Orientation orientation);

  /// Offers candidates for all configurations. True if every isolated one is among them and none is singular
  /// so that it stands for a continuum.
  [[nodiscard]] bool solve(const Pose& target, SolutionSet& solutions) const;

  /// Whether the search is in closed form, so that what it finds at a singular pose represents the continuum.
  [[nodiscard]] bool closed_form() const { return position_ || six_->closed_form(); }

 private:
  int joints_ = 0;
  std::optional<SixRevolute> six_;
  std::optional<ThreeJointPosition> position_;
};

}  // namespace pathvet::detail
