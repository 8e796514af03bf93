#pragma once

#include <memory>
#include <vector>

#include "pathvet/kinematics/chain.hpp"
#include "pathvet/model/path.hpp"

namespace pathvet {

/// All configurations of one pose, whole turns left out: each revolute value lies in (-pi, pi].
struct Configurations {
  std::vector<JointVector> joints;
  /// True where the method finds every isolated solution (closed form or elimination), so that nothing found
  /// means out of reach. False where the solutions form a continuum or may do so (more joints than bound
  /// directions, a singular configuration) and are represented by some, or were sought from many seeds.
  bool complete = false;
};

/// Finds the configurations in which the TCP's pose in the world is `tcp`, as far as `orientation` binds it.
/// Each meets it within 1e-9 of the characteristic length and 1e-9 rad; with fewer joints than bound
/// directions, where a pose written with finitely many digits is met only nearly, within 0.001 mm and 0.0001
/// degrees (the least-squares configuration). Limits play no part, but for where representatives are taken
/// from. Sorted by joint values, first joint first (values within 1e-9 count as equal); the same input gives
/// the same bits.
///
/// Methods, chosen from the geometry when the finder is built:
///
/// Six revolute joints: closed form for a spherical wrist behind any first three axes (Pieper 1968) and for
/// axes 2 to 4 parallel, either also read from the tool's end; else elimination to an eigenvalue problem, at
/// most 16 (Raghavan & Roth 1993; Manocha & Canny 1994).
///
/// Fewer revolute joints, or `axis` with at most five, or `free` with at most three: the same, with joints
/// added that stand at zero at every solution (or turn about the tool's z axis, where that doesn't bind).
///
/// More joints than bound directions: the prismatic ones, or one joint too many, are held at eight places
/// inside the limits and the rest is solved as above; with `axis` and six revolute joints, eight turns about
/// the tool's z axis; else up to 64 configurations by damped least squares from seeds inside the limits.
///
/// Other arms with prismatic joints, and arms whose Jacobian never has full rank: damped least squares from
/// evenly spread seeds until 192 in a row bring nothing new, or 64 configurations are known; likewise where a
/// singular configuration leaves the elimination's result in doubt.
///
/// Where a configuration is singular and stands for a continuum (a straight wrist, the wrist on axis 1) one
/// value of the free joint represents it, zero if that is in reach; two that meet in a fold are given as one.
class ConfigurationFinder {
 public:
  explicit ConfigurationFinder(const Arm& arm, const Pose& tool = {});

  [[nodiscard]] Configurations find(const Pose& tcp, Orientation orientation = Orientation::full) const;

 private:
  struct Methods;
  std::shared_ptr<const Methods> methods_;  // const: copies share it
};

/// The configuration and its whole-turn variants (revolute joints shifted by multiples of 2 pi) that lie
/// inside every joint's limits; for a continuous joint the one in (-pi, pi] alone. Order: first joint
/// slowest, ascending. Empty if none.
[[nodiscard]] std::vector<JointVector> turns_inside_limits(const Arm& arm, const JointVector& joints);

/// Whether every joint and combined limit holds: a limit is broken when exceeded by more than 1e-9 of its
/// size.
[[nodiscard]] bool inside_limits(const Arm& arm, const JointVector& joints);

}  // namespace pathvet
