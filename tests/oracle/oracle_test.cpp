#include <doctest/doctest.h>

#include <cmath>

#include "comparison.hpp"
#include "pathvet/xml/read.hpp"

// check_path against an independent, fine-stepped reference (Orocos KDL for the forward map and the Jacobian,
// plain Newton for the tracking, bisection and golden section for the events) on random arms and paths. What
// the contract promises is what is compared: places to 0.01 mm or degrees, rates to 0.01 %, joints to 1e-4
// degrees.

namespace pathvet::test {
namespace {

struct Sum {
  int cases = 0, segments = 0, horizons = 0, jumps = 0, exact = 0, findings = 0, unclear = 0;

  void add(const Verdict& verdict) {
    ++cases;
    segments += verdict.segments;
    horizons += verdict.horizons;
    jumps += verdict.jumps;
    exact += verdict.exact;
    findings += verdict.findings;
    unclear += verdict.unclear ? 1 : 0;
  }
};

void check(const RandomCase& c, int number, Sum& sum) {
  const CheckOptions options;
  const Reading<PathResult> reading = check_path(c.path, c.cell, options);
  REQUIRE(reading.value);
  const Verdict verdict = compare(c.cell, c.path, options, *reading.value);
  for (const std::string& difference : verdict.differences) FAIL_CHECK("case ", number, ": ", difference);
  sum.add(verdict);
}

void report(const Sum& sum) {
  MESSAGE(sum.cases, " paths, ", sum.segments, " segments to their end, ", sum.findings, " findings, ",
          sum.horizons, " ends of a branch, ", sum.jumps, " jumps, ", sum.exact, " exact passes, ",
          sum.unclear, " too near to the tolerance of exact passes to say");
}

void anywhere(ArmKind kind, int count) {
  Random random(std::string("oracle, anywhere, ") + name(kind));
  Sum sum;
  for (int i = 0; sum.cases < count; ++i) {
    if (const auto c = random_case(random, kind)) check(*c, i, sum);
  }
  report(sum);
  CHECK(sum.findings > 2 * count);
}

/// One path in eight meets the singularity exactly; the others pass it at 1e-6 to 100 mm.
void near_singular(ArmKind kind, int count) {
  Random random(std::string("oracle, near singular, ") + name(kind));
  Sum sum;
  for (int i = 0; sum.cases < count; ++i) {
    const double distance = i % 8 == 0 ? 0.0 : std::pow(10.0, random.uniform(-6, 2));
    if (const auto c = near_singular_case(random, kind, distance)) check(*c, i, sum);
  }
  report(sum);
  CHECK(sum.findings > 2 * count);
  CHECK(sum.unclear * 4 < count);
}

void in_cell(const std::string& file, Orientation orientation, int count) {
  Random random("oracle, " + file);
  const Reading<Cell> cell = read_cell(std::string(PATHVET_SOURCE_DIR) + "/fixtures/cells/" + file + ".xml");
  REQUIRE(cell.value);
  Sum sum;
  for (int i = 0; sum.cases < count; ++i) {
    RandomCase c;
    c.cell = *cell.value;
    c.path = path_in(random, c.cell, orientation);
    check(c, i, sum);
  }
  report(sum);
  CHECK(sum.findings > count);
}

}  // namespace

TEST_CASE("in the bracket cell") {
  in_cell("bracket-trimming", Orientation::full, 20);
}
TEST_CASE("in the screwing cell") {
  in_cell("housing-screwing", Orientation::full, 20);
}
TEST_CASE("in the lid cell") {
  in_cell("lid-assembly", Orientation::full, 4);
}
TEST_CASE("in the edge cell") {
  in_cell("edge-milling", Orientation::axis, 20);
}

TEST_CASE("anywhere: spherical wrist") {
  anywhere(ArmKind::spherical_wrist, 24);
}
TEST_CASE("anywhere: three parallel axes") {
  anywhere(ArmKind::three_parallel, 24);
}
TEST_CASE("anywhere: general six joints") {
  anywhere(ArmKind::general_six, 24);
}
TEST_CASE("anywhere: level four joints") {
  anywhere(ArmKind::level_four, 10);
}
TEST_CASE("anywhere: three joints, position alone") {
  anywhere(ArmKind::position_three, 24);
}
TEST_CASE("anywhere: five joints, tool direction") {
  anywhere(ArmKind::axis_five, 24);
}
TEST_CASE("anywhere: six joints, one of them sliding") {
  anywhere(ArmKind::sliding_six, 24);
}

TEST_CASE("near a singularity: spherical wrist") {
  near_singular(ArmKind::spherical_wrist, 40);
}
TEST_CASE("near a singularity: three parallel axes") {
  near_singular(ArmKind::three_parallel, 40);
}
TEST_CASE("near a singularity: general six joints") {
  near_singular(ArmKind::general_six, 30);
}
TEST_CASE("near a singularity: level four joints") {
  near_singular(ArmKind::level_four, 8);
}
TEST_CASE("near a singularity: three joints, position alone") {
  near_singular(ArmKind::position_three, 30);
}
TEST_CASE("near a singularity: five joints, tool direction") {
  near_singular(ArmKind::axis_five, 30);
}
TEST_CASE("near a singularity: six joints, one of them sliding") {
  near_singular(ArmKind::sliding_six, 40);
}

}  // namespace pathvet::test
