#include "kinematics/circle_equations.hpp"

#include <Eigen/Eigenvalues>
#include <cmath>

#include "pathvet/model/units.hpp"

namespace pathvet::detail {

namespace {

/// Pairs of roots with an imaginary part of the angle below this are tried as real: a double root splits by
/// the square root of the rounding.
constexpr double nearly_real = 1e-4;

double value(const CircleQuadratic& q, double x) {
  const double c = std::cos(x);
  const double s = std::sin(x);
  return q.cc * c * c + q.cs * c * s + q.ss * s * s + q.c * c + q.s * s + q.one;
}

/// The polynomial in y = x - shift.
CircleQuadratic shifted(const CircleQuadratic& q, double shift) {
  const double c = std::cos(shift);
  const double s = std::sin(shift);
  CircleQuadratic out;  // cos x = c cos y - s sin y, sin x = s cos y + c sin y
  out.cc = q.cc * c * c + q.cs * c * s + q.ss * s * s;
  out.ss = q.cc * s * s - q.cs * c * s + q.ss * c * c;
  out.cs = -2 * q.cc * c * s + q.cs * (c * c - s * s) + 2 * q.ss * c * s;
  out.c = q.c * c + q.s * s;
  out.s = -q.c * s + q.s * c;
  out.one = q.one;
  return out;
}

}  // namespace

double wrap_angle(double angle) {
  if (angle > -pi && angle <= pi) return angle;
  const double wrapped = std::remainder(angle, 2 * pi);
  return wrapped <= -pi ? pi : wrapped;
}

Angles<2> solve_linear(double a, double b, double c, double slack) {
  Angles<2> out;
  const double radius = std::hypot(a, b);
  if (radius <= slack) {
    out.free = std::abs(c) <= slack;
    if (out.free) out.add(0);
    return out;
  }
  const double middle = std::atan2(b, a);
  const double excess = std::abs(c) - radius;
  if (excess > slack) return out;
  if (excess >= 0) {
    out.add(wrap_angle(c > 0 ? middle : middle + pi));
    return out;
  }
  const double half = std::atan2(std::sqrt((radius - c) * (radius + c)), c);
  out.add(wrap_angle(middle - half));
  out.add(wrap_angle(middle + half));
  return out;
}

Angles<4> solve_quadratic(const CircleQuadratic& quadratic) {
  constexpr int origins = 7;
  double origin = 0;
  double largest = -1;
  for (int i = 0; i < origins; ++i) {
    const double candidate = 2 * pi * i / origins;
    const double size = std::abs(value(quadratic, candidate + pi));
    if (size > largest) {
      largest = size;
      origin = candidate;
    }
  }
  Angles<4> out;
  if (!(largest > 0)) {
    out.free = true;
    return out;
  }
  const CircleQuadratic q = shifted(quadratic, origin);
  const double leading = q.cc - q.c + q.one;  // coefficients of the quartic in t = tan(y/2)
  Eigen::Matrix4d companion = Eigen::Matrix4d::Zero();
  companion(1, 0) = companion(2, 1) = companion(3, 2) = 1;
  companion(0, 3) = -(q.cc + q.c + q.one) / leading;
  companion(1, 3) = -2 * (q.cs + q.s) / leading;
  companion(2, 3) = -(4 * q.ss - 2 * q.cc + 2 * q.one) / leading;
  companion(3, 3) = -2 * (q.s - q.cs) / leading;
  const Eigen::EigenSolver<Eigen::Matrix4d> solver(companion, false);
  for (const auto& t : solver.eigenvalues()) {
    const double imaginary = 2 * std::abs(t.imag()) / (1 + t.real() * t.real());
    if (imaginary > nearly_real) continue;
    out.add(wrap_angle(2 * std::atan(t.real()) + origin));
  }
  return out;
}

}  // namespace pathvet::detail
