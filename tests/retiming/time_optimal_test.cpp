#include <algorithm>
#include <cmath>
#include <limits>
#include <random>

#include <doctest/doctest.h>

#include "pathvet/model/units.hpp"
#include "pathvet/retiming/time_optimal.hpp"
#include "support/seed.hpp"

namespace pathvet {
namespace {

constexpr double none = std::numeric_limits<double>::infinity();
constexpr int between_points =
    97;  // places of an interval at which limits are looked at, none of them a grid point's

SpeedGrid straight(const std::vector<double>& change, const std::vector<double>& speed,
                   const std::vector<double>& acceleration, int intervals) {
  SpeedGrid grid;
  grid.axes = change.size();
  grid.speed = speed;
  grid.acceleration = acceleration;
  for (int i = 0; i <= intervals; ++i) {
    grid.parameter.push_back(static_cast<double>(i) / intervals);
    grid.ceiling.push_back(none);
    grid.first.insert(grid.first.end(), change.begin(), change.end());
    grid.second.insert(grid.second.end(), change.size(), 0.0);
  }
  return grid;
}

SpeedGrid circle(double radius, double speed, double acceleration, int intervals) {
  SpeedGrid grid;
  grid.axes = 2;
  grid.speed = {speed, speed};
  grid.acceleration = {acceleration, acceleration};
  for (int i = 0; i <= intervals; ++i) {
    const double angle = 2 * pi * i / intervals;
    grid.parameter.push_back(angle);
    grid.ceiling.push_back(none);
    for (double value : {-radius * std::sin(angle), radius * std::cos(angle)}) grid.first.push_back(value);
    for (double value : {-radius * std::cos(angle), -radius * std::sin(angle)}) grid.second.push_back(value);
  }
  return grid;
}

TEST_CASE("a straight joint line, rest to rest: trapezoid and triangle") {
  // Reference values 6.1: T = 1/v + v/a with v = min v_i/|d_i|, a = min a_i/|d_i|.
  for (int intervals : {1000, 1003, 7777}) {
    const SpeedGrid grid = straight({90, -60, 30}, {180, 120, 180}, {400, 500, 300}, intervals);
    const PathSpeed speed = time_optimal_speed(grid, true, true);
    CHECK(std::abs(speed.duration() - 0.95) < 1e-6);
    CHECK(greatest_excess(grid, speed, between_points) <= 1e-12);
    // Never at its speed: 2 / sqrt(a).
    const SpeedGrid slow = straight({90, -60, 30}, {1e4, 1e4, 1e4}, {400, 500, 300}, intervals);
    const double least = std::min({400.0 / 90, 500.0 / 60, 300.0 / 30});
    CHECK(std::abs(time_optimal_speed(slow, true, true).duration() - 2 / std::sqrt(least)) < 1e-6);
  }
  const SpeedGrid grid = straight({90, -60, 30}, {180, 120, 180}, {none, none, none}, 10);
  CHECK(time_optimal_speed(grid, false, false).duration() == doctest::Approx(0.5).epsilon(1e-12));
}

TEST_CASE("a circle by two axes under acceleration limits: the known optimum") {
  // Reference values 6.3: T = 8 sqrt(2 (1 - cos 45 deg)) sqrt(r / a), flying start and end.
  const double known = 8 * std::sqrt(2 * (1 - std::cos(pi / 4))) * std::sqrt(100.0 / 400.0);
  double last = 0;
  for (int intervals : {1000, 10000, 100000}) {
    const SpeedGrid grid = circle(100, none, 400, intervals);
    const PathSpeed speed = time_optimal_speed(grid, false, false);
    CHECK(speed.duration() >= known * (1 - 1e-9));
    CHECK(speed.duration() <= known * (1 + 0.2 / intervals));
    CHECK(greatest_excess(grid, speed, between_points) <= 1e-12);
    last = speed.duration();
  }
  CHECK(last == doctest::Approx(3.061467459).epsilon(2e-6));
}

TEST_CASE("a circle by two axes under speed limits alone") {
  // Reference values 6.2: a lap takes 4 sqrt(2) r / V.
  const SpeedGrid grid = circle(100, 200, none, 10000);
  const PathSpeed speed = time_optimal_speed(grid, false, false);
  CHECK(speed.duration() == doctest::Approx(4 * std::sqrt(2.0) * 100 / 200).epsilon(1e-7));
  CHECK(greatest_excess(grid, speed, between_points) <= 1e-12);
}

/// Sums of a few sines, with zero-inertia points and steep places.
SpeedGrid waves(const std::vector<double>& frequency, const std::vector<double>& phase, int intervals) {
  SpeedGrid grid;
  grid.axes = frequency.size();
  grid.speed.assign(grid.axes, 3.0);
  grid.acceleration.assign(grid.axes, 8.0);
  for (int i = 0; i <= intervals; ++i) {
    const double s = static_cast<double>(i) / intervals;
    grid.parameter.push_back(s);
    grid.ceiling.push_back(2.0);
    for (std::size_t k = 0; k < grid.axes; ++k) {
      const double w = frequency[k];
      grid.first.push_back(w * std::cos(w * s + phase[k]));
      grid.second.push_back(-w * w * std::sin(w * s + phase[k]));
    }
  }
  return grid;
}

TEST_CASE(
    "random curves: no limit broken between the grid points, and within 0.5 % of a ten times finer grid") {
  test::Random random("time-optimal waves");
  for (int run = 0; run < 50; ++run) {
    std::vector<double> frequency, phase;
    for (int k = 0; k < 6; ++k) {
      frequency.push_back(random.uniform(0.5, 25));
      phase.push_back(random.uniform(0, 2 * pi));
    }
    const SpeedGrid coarse = waves(frequency, phase, 1000);
    const PathSpeed speed = time_optimal_speed(coarse, true, true);
    REQUIRE(std::isfinite(speed.duration()));
    CHECK(greatest_excess(coarse, speed, between_points) <= 1e-9);
    const double finer = time_optimal_speed(waves(frequency, phase, 10000), true, true).duration();
    CHECK(speed.duration() <= finer * 1.005);
    CHECK(speed.duration() >= finer * 0.995);
  }
}

TEST_CASE("a profile can't be beaten: more acceleration anywhere breaks a limit or what comes after") {
  // At every interval one limit, the ceiling or the way to the end is active (bang-bang).
  const SpeedGrid grid = straight({1}, {1}, {1}, 100);
  const PathSpeed speed = time_optimal_speed(grid, true, true);
  for (std::size_t i = 0; i < speed.acceleration.size(); ++i) {
    const bool at_speed = std::abs(speed.square[i] - 1) < 1e-9 && std::abs(speed.square[i + 1] - 1) < 1e-9;
    const bool full = std::abs(std::abs(speed.acceleration[i]) - 1) < 1e-6;
    const bool turning = i == 49 || i == 50;
    CHECK((at_speed || full || turning));
  }
}

TEST_CASE("a jump of the second derivative: both sides hold") {
  // A line, then an arc of radius 50 at one place: two grid points there.
  SpeedGrid grid;
  grid.axes = 2;
  grid.speed = {none, none};
  grid.acceleration = {100, 100};
  const auto add = [&](double at, double x, double y, double xx, double yy) {
    grid.parameter.push_back(at);
    grid.ceiling.push_back(none);
    for (double v : {x, y}) grid.first.push_back(v);
    for (double v : {xx, yy}) grid.second.push_back(v);
  };
  for (int i = 0; i <= 100; ++i) add(i, 1, 0, 0, 0);
  for (int i = 0; i <= 100; ++i) {
    const double angle = 0.01 * i;
    add(100 + 50 * angle, std::cos(angle), std::sin(angle), -std::sin(angle) / 50, std::cos(angle) / 50);
  }
  const PathSpeed speed = time_optimal_speed(grid, true, true);
  CHECK(std::isfinite(speed.duration()));
  CHECK(greatest_excess(grid, speed, between_points) <= 1e-9);
  CHECK(speed.square[101] <= 100.0 * 50 * (1 + 1e-9));  // v^2 / r <= a
  CHECK(speed.square[101] == speed.square[100]);
}

}  // namespace
}  // namespace pathvet
