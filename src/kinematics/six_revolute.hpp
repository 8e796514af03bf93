#pragma once

#include <variant>
#include <vector>

#include "kinematics/elimination.hpp"
#include "kinematics/special_six.hpp"

namespace pathvet::detail {

/// Candidates for all configurations of an arm of six revolute joints, by the method that its geometry
/// allows: spherical wrist, three parallel axes 2 to 4 (either also read from the tool's end: axes 1 to 3
/// meeting, axes 3 to 5 parallel), else elimination.
class SixRevolute {
 public:
  explicit SixRevolute(const ScrewAxes& axes);

  /// Candidates with e_1 ... e_6 home = target, to be polished and checked. True if every isolated solution
  /// is among them.
  [[nodiscard]] bool solve(const Pose& target, std::vector<SixAngles>& out) const;

  /// Whether a closed form was found; else `solve` eliminates.
  [[nodiscard]] bool closed_form() const { return !std::holds_alternative<Elimination>(method_); }

 private:
  std::variant<std::monostate, SphericalWrist, ThreeParallel, Elimination> method_;
  bool reversed_ = false;
  Pose home_;
};

}  // namespace pathvet::detail
