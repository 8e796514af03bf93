#include <cmath>

#include "pathvet/model/units.hpp"
#include "pathvet/motion/curve.hpp"

namespace pathvet {
namespace {

/// Three points carry a circle if the triangle's height is above this share of its longest side; below it the
/// centre is lost in rounding.
constexpr double flattest_arc = 1e-9;

Matrix3 cross_matrix(const Vector3& v) {
  Matrix3 m;
  m << 0, -v.z(), v.y(), v.z(), 0, -v.x(), -v.y(), v.x(), 0;
  return m;
}

}  // namespace

Leg Leg::line(const Pose& start, const Vector3& end, const Vector3& turn) {
  Leg leg;
  leg.rotation_ = start.rotation;
  leg.spin_ = turn;
  leg.turn_ = turn.norm();
  if (leg.turn_ > 0) {
    const Matrix3 axis = cross_matrix(turn / leg.turn_);
    leg.turned_ = axis * start.rotation;
    leg.turned_twice_ = axis * leg.turned_;
  }
  leg.origin_ = start.position;
  leg.first_ = end - start.position;
  leg.length_ = leg.first_.norm();
  return leg;
}

bool Leg::is_arc(const Vector3& a, const Vector3& b, const Vector3& c) {
  const double longest = std::max({(b - a).norm(), (c - b).norm(), (c - a).norm()});
  return (b - a).cross(c - a).norm() > flattest_arc * longest * longest;
}

Leg Leg::arc(const Pose& start, const Vector3& via, const Vector3& end, const Vector3& turn) {
  Leg leg = line(start, end, turn);
  const Vector3 u = via - start.position;
  const Vector3 w = end - start.position;
  const Vector3 normal = u.cross(w);
  const Vector3 to_centre =
      (w.squaredNorm() * normal.cross(u) + u.squaredNorm() * w.cross(normal)) / (2.0 * normal.squaredNorm());
  leg.circular_ = true;
  leg.origin_ = start.position + to_centre;
  leg.first_ = -to_centre;
  leg.second_ = normal.normalized().cross(leg.first_);
  const Vector3 ray = end - leg.origin_;
  leg.angle_ = std::atan2(ray.dot(leg.second_), ray.dot(leg.first_));
  // The normal is that of start, via, end in this order, so the arc through via is always the one that turns
  // positively about it.
  if (leg.angle_ <= 0) leg.angle_ += 2.0 * pi;
  leg.length_ = leg.angle_ * leg.first_.norm();
  return leg;
}

void Leg::at(double parameter, CurvePoint& out) const {
  if (circular_) {
    const double c = std::cos(angle_ * parameter);
    const double s = std::sin(angle_ * parameter);
    const Vector3 ray = c * first_ + s * second_;
    out.pose.position = origin_ + ray;
    out.first.head<3>() = angle_ * (c * second_ - s * first_);
    out.second.head<3>() = -angle_ * angle_ * ray;
  } else {
    out.pose.position = origin_ + parameter * first_;
    out.first.head<3>() = first_;
    out.second.head<3>().setZero();
  }
  if (turn_ > 0) {
    const double half = std::sin(0.5 * turn_ * parameter);
    out.pose.rotation = rotation_ + std::sin(turn_ * parameter) * turned_ + 2.0 * half * half * turned_twice_;
  } else {
    out.pose.rotation = rotation_;
  }
  out.first.tail<3>() = spin_;
  out.second.tail<3>().setZero();
}

CurveBounds Leg::bounds() const {
  CurveBounds b;
  b.second_linear = circular_ ? angle_ * length_ : 0.0;
  b.third_linear = circular_ ? angle_ * angle_ * length_ : 0.0;
  return b;
}

}  // namespace pathvet
