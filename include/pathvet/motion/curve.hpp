#pragma once

#include "pathvet/model/path.hpp"

namespace pathvet {

/// A moving pose and its first two derivatives by the segment's fraction: velocity (mm) over angular velocity
/// (rad), and their rates, in the frame that the pose is in.
struct CurvePoint {
  Pose pose;
  Vector6 first = Vector6::Zero();
  Vector6 second = Vector6::Zero();
};

/// How much a curve bends on a stretch: bounds on the norms of its second and third derivatives by the
/// fraction.
struct CurveBounds {
  double second_linear = 0, second_angular = 0;  ///< mm, rad
  double third_linear = 0, third_angular = 0;
};

/// A straight line or an arc with the orientation turning evenly about one fixed axis; the parameter runs
/// from 0 to 1.
class Leg {
 public:
  Leg() = default;
  /// Straight line. Orientation: `start` turned by `turn` (rotation vector in the outer frame, rad).
  static Leg line(const Pose& start, const Vector3& end, const Vector3& turn);
  /// Arc from `start` through `via` to `end`, once at most. Precondition: the points are not collinear (see
  /// is_arc).
  static Leg arc(const Pose& start, const Vector3& via, const Vector3& end, const Vector3& turn);
  /// Whether three points are far enough from a line to carry a circle.
  static bool is_arc(const Vector3& a, const Vector3& b, const Vector3& c);

  [[nodiscard]] double length() const { return length_; }  ///< mm
  [[nodiscard]] double turn() const { return turn_; }      ///< rad
  void at(double parameter, CurvePoint& out) const;        ///< derivatives by the parameter
  [[nodiscard]] CurveBounds bounds() const;                ///< by the parameter

 private:
  Matrix3 rotation_ = Matrix3::Identity();
  Matrix3 turned_ = Matrix3::Zero();        // K R, K the unit axis' cross-product matrix
  Matrix3 turned_twice_ = Matrix3::Zero();  // K K R
  Vector3 spin_ = Vector3::Zero();          // rotation vector of the whole turn
  double turn_ = 0;
  bool circular_ = false;
  Vector3 origin_ = Vector3::Zero();  // line: start; arc: centre
  Vector3 first_ = Vector3::Zero();   // line: end less start; arc: centre to start
  Vector3 second_ = Vector3::Zero();  // arc: a quarter turn ahead of first_
  double angle_ = 0;                  // arc: swept, rad
  double length_ = 0;
};

/// The curve that rounds a corner (contract, section 4): position a cubic Bezier curve, orientation de
/// Casteljau with slerp over three orientations, the curve parameter's rate going evenly in time from
/// `rate_in` to `rate_out` (1/s).
class Corner {
 public:
  Corner() = default;
  Corner(const Pose& a, const Vector3& tangent_a, const Matrix3& corner, const Pose& b,
         const Vector3& tangent_b, double size, double rate_in, double rate_out);

  [[nodiscard]] double duration() const { return 2.0 / (rate_in_ + rate_out_); }  ///< s
  [[nodiscard]] double half_time() const;               ///< s until the parameter is 1/2
  [[nodiscard]] double half_length(bool second) const;  ///< mm
  [[nodiscard]] double half_turn(bool second) const;    ///< rad
  void at(double time, CurvePoint& out) const;          ///< derivatives by time

 private:
  Vector3 control_[4];
  Eigen::Quaterniond orientation_[3];
  double rate_in_ = 1, rate_out_ = 1;
};

}  // namespace pathvet
