#include "kinematics/circle_equations.hpp"
#include "kinematics/special_six.hpp"
#include "pathvet/model/units.hpp"

namespace pathvet::detail {

namespace {

/// Sine of the angle between z4 and z6 below which the first turn is taken as free: the pose can't tell what
/// it is.
constexpr double no_lever = 1e-12;
/// The triangle's sides may miss closing by about this angle (rad); what is let in too much the pose check
/// refuses.
constexpr double slack = 1e-8;

double angle_between(const Vector3& a, const Vector3& b) {
  return std::atan2(a.cross(b).norm(), a.dot(b));
}

}  // namespace

WristTurns::WristTurns(const Vector3& z4, const Vector3& z5, const Vector3& z6)
    : z4_(z4),
      z5_(z5),
      z6_(z6),
      first_side_(angle_between(z4, z5)),
      second_side_(angle_between(z5, z6)),
      angle_at_zero_(angle_about(z5, z4, z6)) {}

WristTurns::Solutions WristTurns::solve(const Matrix3& rotation) const {
  Solutions out;
  const Vector3 wanted = rotation * z6_;
  const double a = first_side_;
  const double b = second_side_;
  const double c = angle_between(z4_, wanted);
  const double above = std::sin(0.5 * (c + a - b)) * std::sin(0.5 * (c - a + b));
  const double below = std::sin(0.5 * (a + b + c)) * std::sin(0.5 * (a + b - c));
  if (above < -slack || below < -slack) return out;
  const double corner = 2 * std::atan2(std::sqrt(std::max(above, 0.0)), std::sqrt(std::max(below, 0.0)));
  const bool straight = z4_.cross(wanted).norm() <= no_lever;
  for (const double sign : {1.0, -1.0}) {
    Turns turns;
    turns.free = straight;
    turns.q5 = wrap_angle(sign * corner - angle_at_zero_);
    turns.q4 = straight ? 0.0 : angle_about(z4_, turned(z6_, z5_, turns.q5), wanted);
    out.values[static_cast<std::size_t>(out.count++)] = with_first(rotation, turns, turns.q4);
    if (corner <= no_lever || pi - corner <= no_lever) break;  // the two are one
  }
  return out;
}

WristTurns::Turns WristTurns::with_first(const Matrix3& rotation, const Turns& free, double q4) const {
  Turns out = free;
  out.q4 = q4;
  const Vector3 mark = z6_.unitOrthogonal();
  out.q6 = angle_about(z6_, mark, turned(turned(rotation * mark, z4_, -q4), z5_, -out.q5));
  return out;
}

}  // namespace pathvet::detail
