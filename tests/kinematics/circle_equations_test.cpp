#include "kinematics/circle_equations.hpp"

#include <doctest/doctest.h>

#include <cmath>
#include <random>

#include "pathvet/model/units.hpp"

using namespace pathvet;
using namespace pathvet::detail;

namespace {

constexpr unsigned seed = 1973;
constexpr double slack = 1e-8;

double value(const CircleQuadratic& q, double x) {
  const double c = std::cos(x);
  const double s = std::sin(x);
  return q.cc * c * c + q.cs * c * s + q.ss * s * s + q.c * c + q.s * s + q.one;
}

}  // namespace

TEST_CASE("angles wrap into minus pi to pi") {
  CHECK(wrap_angle(pi) == pi);
  CHECK(wrap_angle(-pi) == pi);
  CHECK(wrap_angle(0.3) == 0.3);
  CHECK(wrap_angle(7 * pi / 2) == doctest::Approx(-pi / 2));
  CHECK(wrap_angle(-1000) > -pi);
  CHECK(wrap_angle(-1000) <= pi);
}

TEST_CASE("linear in sine and cosine: both solutions, one at the border, none beyond, free at the centre") {
  std::mt19937 random(seed);
  std::uniform_real_distribution<double> any(-2, 2);
  for (int i = 0; i < 1000; ++i) {
    const double a = any(random);
    const double b = any(random);
    const double x = any(random) * pi / 2;
    const Angles<2> found = solve_linear(a, b, a * std::cos(x) + b * std::sin(x), slack);
    double nearest = 10;
    for (const double one : found) {
      nearest = std::min(nearest, std::abs(wrap_angle(one - x)));
      CHECK(std::abs(a * std::cos(one) + b * std::sin(one) - a * std::cos(x) - b * std::sin(x)) < 1e-7);
    }
    CHECK(nearest < 1e-6);
  }
  CHECK(solve_linear(3, 4, 5, slack).count == 1);
  CHECK(solve_linear(3, 4, 5 + 1e-9, slack).count == 1);
  CHECK(solve_linear(3, 4, 5 + 1e-7, slack).count == 0);
  CHECK(solve_linear(3, 4, 5 - 1e-7, slack).count == 2);
  CHECK(*solve_linear(3, 4, -5, slack).begin() == doctest::Approx(std::atan2(4, 3) - pi));
  CHECK(solve_linear(0, 0, 0, slack).free);
  CHECK_FALSE(solve_linear(0, 0, 1, slack).free);
  CHECK(solve_linear(0, 0, 1, slack).count == 0);
}

TEST_CASE("quadratic in sine and cosine: as many sign changes as a fine scan shows") {
  std::mt19937 random(seed);
  std::uniform_real_distribution<double> any(-1, 1);
  int four = 0;
  for (int i = 0; i < 500; ++i) {
    const CircleQuadratic q{any(random), any(random), any(random), any(random), any(random), any(random)};
    constexpr int places = 20000;
    int changes = 0;
    for (int k = 0; k < places; ++k) {
      changes += (value(q, 2 * pi * k / places) < 0) != (value(q, 2 * pi * (k + 1) / places) < 0);
    }
    const Angles<4> found = solve_quadratic(q);
    CHECK(found.count == changes);
    for (const double x : found) CHECK(std::abs(value(q, x)) < 1e-10);
    four += found.count == 4;
  }
  CHECK(four > 10);
}

TEST_CASE("quadratic with a double zero keeps it") {
  // (cos x - cos 0.7)^2 has the double zeros +-0.7.
  const double c = std::cos(0.7);
  const Angles<4> found = solve_quadratic({1, 0, 0, -2 * c, 0, c * c});
  CHECK(found.count == 4);
  for (const double x : found) CHECK(std::abs(x) == doctest::Approx(0.7).epsilon(1e-5));
  CHECK(solve_quadratic({}).free);
}
