#pragma once

#include <vector>

#include "kinematics/loop_equations.hpp"
#include "kinematics/special_six.hpp"

namespace pathvet::detail {

/// All configurations of any arm of six revolute joints, at most 16 (Primrose 1986), by elimination to an
/// eigenvalue problem (Raghavan & Roth 1993; Manocha & Canny 1994): the determinant of LoopEquations vanishes
/// at every solution's q3, and as a polynomial in its half tangent it has 24 roots, eight of which (+-i)
/// belong to no solution.
///
/// The elimination breaks down where the geometry is special (some joints parallel or meeting) or where two
/// solutions share q3. But with the pose given the six joints are a closed loop, so any of them, and either
/// sense of rotation, may play the part of the first: twelve roles. An attempt is sound if the problem is
/// well conditioned and every real root leads to angles that close the loop; roles are tried until one is.
/// Which come first, and which are hopeless, is settled by trials on fixed poses when the object is built.
/// Where no role is sound because solutions share the value of every joint that could play the part (round
/// poses), a pose slightly off tells them apart, and polishing leads back.
class Elimination {
 public:
  explicit Elimination(const ScrewAxes& axes);

  /// Candidates with e_1 ... e_6 = motion. False if no role was sound: then some may be missing.
  [[nodiscard]] bool solve(const Pose& motion, std::vector<SixAngles>& out) const;

 private:
  struct Role {
    bool reversed = false;
    int first = 0;
    int sound = 0;  ///< trials in which it was
  };

  void rank_roles(const ScrewAxes& axes);
  /// Appends to `out`, roots with an imaginary part of q3 up to `most_imaginary` (rad) included. True if
  /// sound.
  [[nodiscard]] bool attempt(const Role& role, const Pose& motion, double most_imaginary,
                             std::vector<SixAngles>& out) const;
  [[nodiscard]] bool attempt_any(const Pose& motion, double most_imaginary,
                                 std::vector<SixAngles>& out) const;
  [[nodiscard]] Pose shifted(const Pose& motion, int index) const;

  SixLines forward_;
  SixLines backward_;
  Pose home_;
  double length_;
  std::vector<Role> roles_;
};

}  // namespace pathvet::detail
