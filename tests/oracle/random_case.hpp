#pragma once

#include <optional>
#include <string>

#include "pathvet/model/path.hpp"
#include "reference_arm.hpp"
#include "support/random_arm.hpp"

namespace pathvet::test {

enum class ArmKind {
  spherical_wrist,
  three_parallel,
  general_six,
  level_four,
  position_three,
  axis_five,
  sliding_six
};
inline constexpr ArmKind arm_kinds[] = {
    ArmKind::spherical_wrist, ArmKind::three_parallel, ArmKind::general_six, ArmKind::level_four,
    ArmKind::position_three,  ArmKind::axis_five,      ArmKind::sliding_six};
[[nodiscard]] const char* name(ArmKind kind);

/// A cell and a path of one to three linear segments that start at taught joints.
struct RandomCase {
  LinkArm links;  ///< the arm as it would be written
  Cell cell;
  Path path;
  std::string note;
};

/// Paths through nowhere in particular.
[[nodiscard]] std::optional<RandomCase> random_case(Random& random, ArmKind kind);

/// A path that passes a singular configuration of the arm at a distance of about `distance` mm.
[[nodiscard]] std::optional<RandomCase> near_singular_case(Random& random, ArmKind kind, double distance);

/// Linear segments through a cell that exists, from inside its limits, with its first tool and world poses.
[[nodiscard]] Path path_in(Random& random, const Cell& cell, Orientation orientation);

[[nodiscard]] JointVector joints_of(const Column& q);
[[nodiscard]] Column column_of(const JointVector& q);

}  // namespace pathvet::test
