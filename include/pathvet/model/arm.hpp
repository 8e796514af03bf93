#pragma once

#include <optional>
#include <string>
#include <vector>

#include "pathvet/model/pose.hpp"

namespace pathvet {

inline constexpr int max_joints = 16;

/// One value per joint, in the order of the cell: rad or mm. Bounded size, never on the heap.
using JointVector = Eigen::Matrix<double, Eigen::Dynamic, 1, 0, max_joints, 1>;

enum class JointType { revolute, prismatic };

/// A joint and its link: `before * motion(q) * after`, where the motion is about (revolute) or along
/// (prismatic) the z axis of the frame that `before` leads to. Every way to write a link in a cell file comes
/// down to this one form:
///   distal DH:    before = Rz(theta) Tz(d), after = Tx(a) Rx(alpha)
///   proximal DH:  before = Rx(alpha) Tx(a) Rz(theta) Tz(d), after = identity
///   mount:        before = placement * A, after = A^-1, where A turns z into `axis`
struct Joint {
  std::string name;
  JointType type = JointType::revolute;
  bool continuous = false;  ///< no position limits; lower and upper are then -inf and +inf
  double lower = 0;         ///< rad or mm
  double upper = 0;
  double speed = 0;                    ///< greatest |rate|, rad/s or mm/s
  std::optional<double> acceleration;  ///< rad/s^2 or mm/s^2
  Pose before;
  Pose after;
  double link_length = 0;  ///< mm; this joint's part of the characteristic length (contract, section 6)
};

/// A bound on a linear combination of joints of one type (arms with linkages).
struct CombinedLimit {
  struct Term {
    int joint = 0;  ///< index into Arm::joints
    double factor = 0;
  };
  std::string name;
  JointType type = JointType::revolute;
  std::vector<Term> terms;
  std::optional<double> lower;  ///< both or neither, rad or mm
  std::optional<double> upper;
  std::optional<double> speed;  ///< rad/s or mm/s
};

/// A serial chain of 1 to 16 joints: base * (before motion after)... * flange.
struct Arm {
  std::string name;
  Pose base;  ///< pose of the arm's base in the world
  std::vector<Joint> joints;
  Pose flange;  ///< pose of the mechanical interface after the last link
  std::vector<CombinedLimit> combined_limits;
  double characteristic_length = 1;  ///< mm, > 0

  [[nodiscard]] int joint_count() const { return static_cast<int>(joints.size()); }
};

}  // namespace pathvet
