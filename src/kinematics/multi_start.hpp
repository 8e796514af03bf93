#pragma once

#include "kinematics/solution_set.hpp"

namespace pathvet::detail {

/// Points of the unit cube, evenly spread without chance: the additive recurrence on powers of the root of
/// x^(d+1) = x + 1 (Roberts 2018, after Weyl).
class SpreadPoints {
 public:
  explicit SpreadPoints(int dimensions);
  [[nodiscard]] JointVector point(int index) const;

 private:
  JointVector steps_;
};

/// Where seeds lie, joint by joint.
struct SeedBox {
  JointVector lower;
  JointVector upper;
};

/// Whole turns for revolute joints; for prismatic ones the limits, or what the arm's size suggests if they
/// are endless.
[[nodiscard]] SeedBox whole_box(const Arm& arm);
/// The limits, as far as they are finite.
[[nodiscard]] SeedBox limit_box(const Arm& arm);

/// Damped least squares from evenly spread seeds until `patience` seeds in a row brought nothing new.
void search_from_seeds(const SeedBox& box, int patience, int most_found, SolutionSet& solutions);

}  // namespace pathvet::detail
