#pragma once

#include <optional>
#include <string>
#include <vector>

#include "pathvet/model/arm.hpp"

namespace pathvet {

/// What a finding says; the order is the alphabetical one of their names in reports, which is how findings
/// that begin at the same place are ordered.
enum class Code {
  arm_speed,
  branch_flip,
  joint_acceleration,
  joint_jump,
  joint_limit,
  joint_speed,
  limit_margin,
  out_of_reach,
  singular_pass,
  speed_margin,
  taught_mismatch,
  unproven
};

enum class Level { error, warning };

/// "joint-limit" and so on, as in the contract.
[[nodiscard]] const char* name(Code code);
[[nodiscard]] Level level(Code code);

/// What a finding's value and limit measure; reporting turns it into a unit (rad to deg, ...).
enum class Quantity {
  none,
  pure,  ///< free of units
  angle,
  length,
  angular_speed,
  linear_speed,
  angular_acceleration,
  linear_acceleration
};

enum class SingularKind { wrist, elbow, shoulder, general };
[[nodiscard]] const char* name(SingularKind kind);

/// What is singular, and what it costs, at the place where the smallest singular value is least.
struct SingularDetail {
  SingularKind kind = SingularKind::general;
  double smallest_singular_value = 0;
  /// How far the arm is from the singular configuration in its own measure: the bend angle of wrist or elbow
  /// (rad), or the wrist centre's distance from the first axis (mm). None for `general`.
  std::optional<double> nearness;
  Quantity nearness_quantity = Quantity::none;
  JointVector runaway;  ///< right singular vector: how fast each joint runs away; largest component positive
  Vector6 lost_motion =
      Vector6::Zero();  ///< left singular vector in the world: linear over angular, unit length
};

/// One flagged stretch of one segment. Internal units (mm, rad, s).
struct Finding {
  Code code = Code::unproven;
  int segment = 0;                      ///< counts from 1
  int axis = -1;                        ///< index into PathResult::axes; -1 where no joint is meant
  double begin = 0, end = 0, peak = 0;  ///< fractions of the segment
  double begin_length = 0, end_length = 0, peak_length = 0;  ///< mm from the segment's begin
  double begin_time = 0, end_time = 0, peak_time = 0;        ///< s from the segment's begin
  std::optional<double> value;                               ///< none: not applicable, or unbounded
  std::optional<double> limit;
  double ratio = 0;  ///< |value| / |limit| for speeds and accelerations
  Quantity quantity = Quantity::none;
  bool unbounded =
      false;  ///< the rate grows without bound at an end of the stretch; value and ratio are then null
  JointVector joints;                  ///< configuration at the peak
  Pose pose;                           ///< of the TCP at the peak, in the segment's frame
  JointVector from_joints, to_joints;  ///< joint-jump and branch-flip: the configurations on either side
  std::string from_branch, to_branch;  ///< branch-flip, joint-jump
  std::optional<double> position_miss, orientation_miss;  ///< out-of-reach: mm, rad
  std::optional<SingularDetail> singular;                 ///< singular-pass
  std::string point;                                      ///< arm-speed: the point that is too fast
  /// The greatest constant programmed speed at which this finding alone would vanish (units of the segment's
  /// highest_speed); none where no speed helps.
  std::optional<double> helpful_speed;
};

}  // namespace pathvet
