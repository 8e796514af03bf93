#include <array>
#include <boost/math/quadrature/gauss.hpp>
#include <cmath>

#include "pathvet/motion/curve.hpp"

namespace pathvet {
namespace {

/// A value with its first two derivatives by the curve parameter (a truncated Taylor series).
struct Jet {
  double value = 0, first = 0, second = 0;
};

Jet operator+(const Jet& a, const Jet& b) {
  return {a.value + b.value, a.first + b.first, a.second + b.second};
}
Jet operator-(const Jet& a, const Jet& b) {
  return {a.value - b.value, a.first - b.first, a.second - b.second};
}
Jet operator*(const Jet& a, const Jet& b) {
  return {a.value * b.value, a.first * b.value + a.value * b.first,
          a.second * b.value + 2 * a.first * b.first + a.value * b.second};
}

/// f(a) from f's value and derivatives at a.value.
Jet compose(const Jet& a, double f, double df, double ddf) {
  return {f, df * a.first, ddf * a.first * a.first + df * a.second};
}
Jet cosine(const Jet& a) {
  return compose(a, std::cos(a.value), -std::sin(a.value), -std::cos(a.value));
}

/// x / sin x and its derivatives; the series holds below 0.05 with an error under 1e-12.
Jet over_sine(const Jet& x) {
  const double v = x.value;
  if (std::abs(v) < 0.05) {
    const double v2 = v * v;
    const double f = 1 + v2 * (1.0 / 6 + v2 * (7.0 / 360 + v2 * (31.0 / 15120 + v2 * 127.0 / 604800)));
    const double df = v * (1.0 / 3 + v2 * (7.0 / 90 + v2 * (31.0 / 2520 + v2 * 127.0 / 75600)));
    const double ddf = 1.0 / 3 + v2 * (7.0 / 30 + v2 * (31.0 / 504 + v2 * 127.0 / 10800));
    return compose(x, f, df, ddf);
  }
  const double s = std::sin(v);
  const double c = std::cos(v);
  return compose(x, v / s, (s - v * c) / (s * s), (v * (1 + c * c) - 2 * s * c) / (s * s * s));
}

using JetQuaternion = std::array<Jet, 4>;  // w x y z

JetQuaternion multiply(const JetQuaternion& a, const JetQuaternion& b) {
  return {a[0] * b[0] - a[1] * b[1] - a[2] * b[2] - a[3] * b[3],
          a[0] * b[1] + a[1] * b[0] + a[2] * b[3] - a[3] * b[2],
          a[0] * b[2] - a[1] * b[3] + a[2] * b[0] + a[3] * b[1],
          a[0] * b[3] + a[1] * b[2] - a[2] * b[1] + a[3] * b[0]};
}

JetQuaternion conjugate(JetQuaternion q) {
  for (std::size_t i = 1; i < 4; ++i) q[i] = Jet{} - q[i];
  return q;
}

/// exp(power * log q) for a unit q with w > 0. log is smooth there: half-angle over its sine times the vector
/// part.
JetQuaternion power(const JetQuaternion& q, const Jet& exponent) {
  const Jet sine_squared = q[1] * q[1] + q[2] * q[2] + q[3] * q[3];
  if (sine_squared.value < 1e-26) {
    // The two ends coincide here (and, both being smooth, stay together to first order): linear blending is
    // exact to the square of the angle between them.
    JetQuaternion out{Jet{1, 0, 0}, exponent * q[1], exponent * q[2], exponent * q[3]};
    return out;
  }
  const double s = std::sqrt(sine_squared.value);
  const Jet root = compose(sine_squared, s, 0.5 / s, -0.25 / (s * s * s));
  const double w = q[0].value;
  // half = atan2(root, w): d half = (w d root - root d w), with root^2 + w^2 = 1 along the way.
  Jet half;
  half.value = std::atan2(s, w);
  half.first = w * root.first - s * q[0].first;
  half.second = w * root.second - s * q[0].second;
  const Jet scaled = exponent * half;
  // sin(e h) / sin(h) = e * (h / sin h) / (e h / sin(e h))
  const Jet ratio_denominator = over_sine(scaled);
  const double r = ratio_denominator.value;
  const Jet inverse = compose(ratio_denominator, 1 / r, -1 / (r * r), 2 / (r * r * r));
  const Jet factor = exponent * over_sine(half) * inverse;
  return {cosine(scaled), factor * q[1], factor * q[2], factor * q[3]};
}

JetQuaternion slerp(const JetQuaternion& a, const JetQuaternion& b, const Jet& at) {
  JetQuaternion between = multiply(conjugate(a), b);
  if (between[0].value < 0) {
    for (Jet& c : between) c = Jet{} - c;
  }
  return multiply(a, power(between, at));
}

JetQuaternion constant(const Eigen::Quaterniond& q) {
  return {Jet{q.w(), 0, 0}, Jet{q.x(), 0, 0}, Jet{q.y(), 0, 0}, Jet{q.z(), 0, 0}};
}

}  // namespace

Corner::Corner(const Pose& a, const Vector3& tangent_a, const Matrix3& corner, const Pose& b,
               const Vector3& tangent_b, double size, double rate_in, double rate_out)
    : control_{a.position, a.position + 2.0 / 3.0 * size * tangent_a,
               b.position - 2.0 / 3.0 * size * tangent_b, b.position},
      orientation_{quaternion(a.rotation), quaternion(corner), quaternion(b.rotation)},
      rate_in_(rate_in),
      rate_out_(rate_out) {}

double Corner::half_time() const {
  // u(t) = rate_in t + (rate_out - rate_in) t^2 / (2 T) = 1/2, in the form without cancellation.
  const double gain = (rate_out_ - rate_in_) / duration();
  return 1.0 / (rate_in_ + std::sqrt(rate_in_ * rate_in_ + gain));
}

void Corner::at(double time, CurvePoint& out) const {
  const double gain = (rate_out_ - rate_in_) / duration();
  const double u = time * (rate_in_ + 0.5 * gain * time);
  const double du = rate_in_ + gain * time;
  const double v = 1 - u;
  const Vector3 by_u = 3 * (v * v * (control_[1] - control_[0]) + 2 * u * v * (control_[2] - control_[1]) +
                            u * u * (control_[3] - control_[2]));
  const Vector3 by_uu = 6 * (v * (control_[2] - 2 * control_[1] + control_[0]) +
                             u * (control_[3] - 2 * control_[2] + control_[1]));
  out.pose.position = v * v * v * control_[0] + 3 * u * v * v * control_[1] + 3 * u * u * v * control_[2] +
                      u * u * u * control_[3];
  out.first.head<3>() = du * by_u;
  out.second.head<3>() = du * du * by_uu + gain * by_u;

  const Jet at{u, du, gain};  // derivatives by time from here on
  const JetQuaternion first = slerp(constant(orientation_[0]), constant(orientation_[1]), at);
  const JetQuaternion second = slerp(constant(orientation_[1]), constant(orientation_[2]), at);
  const JetQuaternion q = slerp(first, second, at);
  const Eigen::Quaterniond value(q[0].value, q[1].value, q[2].value, q[3].value);
  const Eigen::Quaterniond rate(q[0].first, q[1].first, q[2].first, q[3].first);
  const Eigen::Quaterniond rate_rate(q[0].second, q[1].second, q[2].second, q[3].second);
  out.pose.rotation = value.normalized().toRotationMatrix();
  out.first.tail<3>() = 2 * (rate * value.conjugate()).vec();
  out.second.tail<3>() = 2 * (rate_rate * value.conjugate()).vec();
}

double Corner::half_length(bool second) const {
  const double from = second ? half_time() : 0.0;
  const double to = second ? duration() : half_time();
  const auto speed = [this](double time) {
    CurvePoint point;
    at(time, point);
    return point.first.head<3>().norm();
  };
  return boost::math::quadrature::gauss<double, 30>::integrate(speed, from, to);
}

double Corner::half_turn(bool second) const {
  const double from = second ? half_time() : 0.0;
  const double to = second ? duration() : half_time();
  const auto rate = [this](double time) {
    CurvePoint point;
    at(time, point);
    return point.first.tail<3>().norm();
  };
  return boost::math::quadrature::gauss<double, 30>::integrate(rate, from, to);
}

}  // namespace pathvet
