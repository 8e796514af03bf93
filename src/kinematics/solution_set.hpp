#pragma once

#include <vector>

#include "kinematics/pose_solver.hpp"

namespace pathvet::detail {

/// Gathers candidates for one pose: polishes each, refuses what misses the pose, keeps each configuration
/// once.
class SolutionSet {
 public:
  SolutionSet(const Chain& chain, Orientation orientation, const Pose& target);

  /// `most_steps` of damped least squares at most. True if the candidate led to a configuration not yet
  /// there.
  bool offer(JointVector candidate, int most_steps);

  [[nodiscard]] int size() const { return static_cast<int>(found_.size()); }
  /// Whether at one of them the Jacobian of the bound directions has lost rank: the configuration may then be
  /// one of a continuum.
  [[nodiscard]] bool any_singular() const;
  /// Sorted by joint values, first joint first.
  [[nodiscard]] std::vector<JointVector> sorted() const;

 private:
  bool merge(const JointVector& candidate, const Miss& miss, JointVector& kept) const;
  void wrap(JointVector& q) const;
  [[nodiscard]] double distance(const JointVector& a, const JointVector& b) const;
  [[nodiscard]] JointVector middle(const JointVector& a, const JointVector& b) const;
  [[nodiscard]] bool meets(const Miss& miss) const;

  const Chain* chain_;
  PoseSolver solver_;
  Pose target_;
  double position_limit_;
  double rotation_limit_;
  std::vector<JointVector> found_;
};

}  // namespace pathvet::detail
