#pragma once

#include <array>

namespace pathvet::detail {

/// The same angle in (-pi, pi].
[[nodiscard]] double wrap_angle(double angle);

/// Real angles that solve an equation on the circle. `free`: every angle does.
template <int Most>
struct Angles {
  int count = 0;
  bool free = false;
  std::array<double, static_cast<std::size_t>(Most)> values{};

  void add(double angle) {
    if (count < Most) values[static_cast<std::size_t>(count++)] = angle;
  }
  [[nodiscard]] const double* begin() const { return values.data(); }
  [[nodiscard]] const double* end() const { return values.data() + count; }
};

/// Angles x with a cos x + b sin x = c. `slack`: how far (in the unit of a, b, c) the equation may be missed;
/// within it an extremum counts as the double solution (reported once). Below `slack` in all of a, b, c the
/// angle is free, and one representative (0) is given.
[[nodiscard]] Angles<2> solve_linear(double a, double b, double c, double slack);

/// A polynomial of degree two in cos x and sin x.
struct CircleQuadratic {
  double cc = 0, cs = 0, ss = 0, c = 0, s = 0, one = 0;
};

/// Its real zeros, at most four: eigenvalues of the companion matrix of the quartic in tan((x - x0)/2), with
/// x0 chosen so that the leading coefficient is largest. Nearly real pairs are given too: the caller checks
/// what it uses.
[[nodiscard]] Angles<4> solve_quadratic(const CircleQuadratic& quadratic);

}  // namespace pathvet::detail
