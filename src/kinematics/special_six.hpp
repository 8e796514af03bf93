#pragma once

#include <array>
#include <optional>
#include <vector>

#include "kinematics/three_joints.hpp"

namespace pathvet::detail {

/// A candidate for a configuration of six revolute joints; `free`: it stands for a continuum of solutions.
struct SixAngles {
  std::array<double, 6> q{};
  bool free = false;
};

/// Turns about three directions z4, z5, z6 that together make a given rotation, by the spherical triangle of
/// z4, z5 and the wanted z6 (half-angle formulas, which lose no digits near a straight wrist). At a straight
/// wrist (z4 and z6 in line to 1e-12) the first turn is free and 0 stands for it.
class WristTurns {
 public:
  struct Turns {
    double q4 = 0, q5 = 0, q6 = 0;
    bool free = false;
  };

  WristTurns() = default;
  WristTurns(const Vector3& z4, const Vector3& z5, const Vector3& z6);

  /// Up to two; those that miss by about 1e-8 rad are still given, to be polished or refused.
  struct Solutions {
    int count = 0;
    std::array<Turns, 2> values;
    [[nodiscard]] const Turns* begin() const { return values.data(); }
    [[nodiscard]] const Turns* end() const { return values.data() + count; }
  };
  [[nodiscard]] Solutions solve(const Matrix3& rotation) const;

  /// Another member of a continuum: the first turn given, the last adapted to it.
  [[nodiscard]] Turns with_first(const Matrix3& rotation, const Turns& free, double q4) const;

 private:
  Vector3 z4_ = Vector3::Zero(), z5_ = Vector3::Zero(), z6_ = Vector3::Zero();
  double first_side_ = 0;   // angle between z4 and z5
  double second_side_ = 0;  // angle between z5 and z6
  double angle_at_zero_ = 0;
};

/// Axes 4, 5 and 6 meet in a point: the first three joints carry that point (ThreeJointPosition), the last
/// three make the rotation that is then left (WristTurns).
class SphericalWrist {
 public:
  /// None if the axes don't meet so, or every configuration is singular.
  [[nodiscard]] static std::optional<SphericalWrist> detect(const ScrewAxes& axes);

  /// All q with e_1 ... e_6 = motion, to be checked against the pose; false if a continuum has to be
  /// searched.
  [[nodiscard]] bool solve(const Pose& motion, std::vector<SixAngles>& out) const;

 private:
  std::array<AxisLine, 6> lines_;
  Vector3 centre_ = Vector3::Zero();
  ThreeJointPosition position_;
  WristTurns wrist_;
};

/// Axes 2, 3 and 4 are parallel: joints 2 to 4 change neither the height of a point along their direction z
/// nor the angle of a direction to z. That gives two equations, linear in sine and cosine of q1 and of q5: a
/// quartic, or two linear equations one after the other where axes 5 and 6 meet or are parallel. Joints 2 to
/// 4 are a planar arm.
class ThreeParallel {
 public:
  [[nodiscard]] static std::optional<ThreeParallel> detect(const ScrewAxes& axes);
  [[nodiscard]] bool solve(const Pose& motion, std::vector<SixAngles>& out) const;

 private:
  /// cosine * cos q + sine * sin q + one
  struct Linear {
    double cosine = 0, sine = 0, one = 0;
    [[nodiscard]] double at(double angle) const {
      return cosine * std::cos(angle) + sine * std::sin(angle) + one;
    }
  };
  [[nodiscard]] Linear along_axis(const Vector3& axis, const Vector3& vector, double sign) const;
  [[nodiscard]] WristTurns::Turns turns_at(const Matrix3& rotation, double q5) const;
  /// True if joints 2 to 4 can do their part.
  bool finish(const Pose& motion, double q1, const WristTurns::Turns& turns,
              std::vector<SixAngles>& out) const;
  bool finish_free(const Pose& motion, double q1, const Matrix3& rotation, const WristTurns::Turns& turns,
                   std::vector<SixAngles>& out) const;

  std::array<AxisLine, 6> lines_;
  double length_ = 1;
  CommonNormal fifth_to_sixth_;
  WristTurns wrist_;
  bool wrist_meets_ = false;
  bool wrist_parallel_ = false;
};

}  // namespace pathvet::detail
