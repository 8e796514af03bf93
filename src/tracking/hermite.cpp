#include "pathvet/tracking/hermite.hpp"

namespace pathvet {
namespace {

/// Basis values of one derivative order, for (value, rate, rate rate) at the begin and then at the end.
struct Basis {
  double a0, a1, a2, b0, b1, b2;

  template <typename T>
  [[nodiscard]] T mix(const T& v0, const T& d0, const T& s0, const T& v1, const T& d1, const T& s1) const {
    return a0 * v0 + a1 * d0 + a2 * s0 + b0 * v1 + b1 * d1 + b2 * s1;
  }
};

}  // namespace

void interpolate(const Step& step, double t, Node& out) {
  const double h = step.length;
  const double u = t / h;
  const double u2 = u * u;
  const double u3 = u2 * u;
  const double u4 = u3 * u;
  const double u5 = u4 * u;
  const Basis value{1 - 10 * u3 + 15 * u4 - 6 * u5,
                    h * (u - 6 * u3 + 8 * u4 - 3 * u5),
                    h * h * 0.5 * (u2 - 3 * u3 + 3 * u4 - u5),
                    10 * u3 - 15 * u4 + 6 * u5,
                    h * (-4 * u3 + 7 * u4 - 3 * u5),
                    h * h * 0.5 * (u3 - 2 * u4 + u5)};
  const Basis first{(-30 * u2 + 60 * u3 - 30 * u4) / h,
                    1 - 18 * u2 + 32 * u3 - 15 * u4,
                    h * 0.5 * (2 * u - 9 * u2 + 12 * u3 - 5 * u4),
                    (30 * u2 - 60 * u3 + 30 * u4) / h,
                    -12 * u2 + 28 * u3 - 15 * u4,
                    h * 0.5 * (3 * u2 - 8 * u3 + 5 * u4)};
  const Basis second{(-60 * u + 180 * u2 - 120 * u3) / (h * h), (-36 * u + 96 * u2 - 60 * u3) / h,
                     0.5 * (2 - 18 * u + 36 * u2 - 20 * u3),    (60 * u - 180 * u2 + 120 * u3) / (h * h),
                     (-24 * u + 84 * u2 - 60 * u3) / h,         0.5 * (6 * u - 24 * u2 + 20 * u3)};
  const Node& a = step.begin;
  const Node& b = step.end;
  const auto fraction = [&](const Basis& basis) {
    return basis.mix(a.fraction, a.fraction_rate, a.fraction_rate_rate, b.fraction, b.fraction_rate,
                     b.fraction_rate_rate);
  };
  const auto joints = [&](const Basis& basis) {
    return JointVector(basis.a0 * a.q + basis.a1 * a.rate + basis.a2 * a.rate_rate + basis.b0 * b.q +
                       basis.b1 * b.rate + basis.b2 * b.rate_rate);
  };
  out.fraction = fraction(value);
  out.fraction_rate = fraction(first);
  out.fraction_rate_rate = fraction(second);
  out.q = joints(value);
  out.rate = joints(first);
  out.rate_rate = joints(second);
  out.singular_low = 0;
}

}  // namespace pathvet
