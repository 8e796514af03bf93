#include <doctest/doctest.h>

#include <map>

#include "kinematics/configuration_checks.hpp"

using namespace pathvet;
using namespace pathvet::test;

namespace {

constexpr unsigned seed = 1973;

struct Draw {
  std::mt19937 random{seed};
  double operator()(double lower, double upper) {
    return std::uniform_real_distribution<double>(lower, upper)(random);
  }
};

JointVector random_joints(const Arm& arm, Draw& draw) {
  JointVector q(arm.joint_count());
  for (int i = 0; i < arm.joint_count(); ++i) {
    const bool revolute = arm.joints[static_cast<std::size_t>(i)].type == JointType::revolute;
    q[i] = revolute ? draw(-pi, pi) : draw(-800, 800);
  }
  return q;
}

Arm general_arm(Draw& draw, int joints = 6) {
  std::vector<Row> rows;
  for (int i = 0; i < joints; ++i)
    rows.push_back({draw(-180, 180), draw(-300, 300), draw(-400, 400), draw(-170, 170)});
  return distal(rows);
}

/// The configuration that made a pose is among those found for it, and so is every configuration for any
/// other found: the count is the same from wherever one comes. Returns how often each count occurred.
std::map<std::size_t, int> check_round_trips(const Arm& arm, int poses, Draw& draw,
                                             bool expect_complete = true,
                                             Orientation orientation = Orientation::full) {
  std::map<std::size_t, int> counts;
  const ConfigurationFinder finder(arm);
  const Chain chain(arm);
  for (int k = 0; k < poses; ++k) {
    const JointVector q = random_joints(arm, draw);
    const Pose target = chain.forward(q);
    const Configurations found = finder.find(target, orientation);
    CAPTURE(k);
    CHECK(contains(arm, found, q, 1e-5));
    CHECK(found.complete == expect_complete);
    check_promises(arm, target, found, orientation);
    for (const JointVector& other : found.joints) {
      CHECK(finder.find(chain.forward(other), orientation).joints.size() == found.joints.size());
      if (orientation != Orientation::full) break;
    }
    ++counts[found.joints.size()];
  }
  return counts;
}

bool only_even(const std::map<std::size_t, int>& counts, std::size_t most) {
  for (const auto& [count, times] : counts) {
    if (count % 2 != 0 || count == 0 || count > most) return false;
  }
  return true;
}

}  // namespace

// A solver's self-test, no source: a generic pose has an even number of configurations, at most eight with a
// spherical wrist (Pieper 1968), at most sixteen in general (Primrose 1986; from memory). Seed 1973
// throughout.

TEST_CASE("round trips: spherical wrists") {
  Draw draw;
  for (int i = 0; i < 20; ++i) {
    const Arm parallel = distal({{0, draw(0, 400), draw(-200, 200), draw(60, 120)},
                                 {0, draw(-50, 50), draw(200, 600), 0},
                                 {0, draw(-50, 50), draw(-150, 150), draw(60, 120)},
                                 {0, draw(200, 600), 0, draw(-110, -60)},
                                 {0, 0, 0, draw(60, 110)},
                                 {0, draw(0, 200), draw(-50, 50), draw(-90, 90)}});
    CHECK(only_even(check_round_trips(parallel, 10, draw), 8));
  }
}

TEST_CASE("round trips: spherical wrists on any three axes") {
  Draw draw;
  for (int i = 0; i < 20; ++i) {
    Arm arm = general_arm(draw, 3);
    for (const Row& row : {Row{0, 300, 0, -90}, Row{0, 0, 0, 70}, Row{20, 100, 30, 10}}) {
      add_joint(arm, turn(Vector3::UnitZ(), row.theta) * shift(0, 0, row.d),
                shift(row.a, 0, 0) * turn(Vector3::UnitX(), row.alpha), std::hypot(row.a, row.d));
    }
    arm.joints[2].after = turn(Vector3::UnitX(), 80);
    set_length(arm);
    CHECK(only_even(check_round_trips(arm, 10, draw), 8));
  }
}

TEST_CASE("round trips: a wrist of three meeting axes at the base") {
  Draw draw;
  const Arm arm = distal(
      {{0, 300, 0, 90}, {0, 0, 0, -80}, {0, 400, 50, 90}, {0, 30, 500, 0}, {0, 40, 100, 70}, {0, 50, 80, 0}});
  CHECK(only_even(check_round_trips(arm, 100, draw), 8));
}

TEST_CASE("round trips: three parallel axes") {
  Draw draw;
  for (int i = 0; i < 20; ++i) {
    // Axes 5 and 6 meet, lie apart, or are parallel, in turn.
    const double apart_5_6 = i % 3 == 0 ? 0 : draw(20, 100);
    const double twist_5_6 = i % 3 == 2 ? 0 : draw(60, 120);
    const Arm arm = distal({{0, draw(0, 300), draw(0, 100), draw(60, 120)},
                            {0, draw(-50, 50), draw(300, 500), 0},
                            {0, draw(-50, 50), draw(300, 500), 0},
                            {0, draw(50, 150), draw(0, 60), draw(60, 120)},
                            {0, draw(50, 150), apart_5_6, twist_5_6},
                            {0, draw(0, 100), 0, 0}});
    CHECK(only_even(check_round_trips(arm, 10, draw), 16));
  }
}

TEST_CASE("round trips: wrists with an offset") {
  Draw draw;
  const std::vector<Arm> arms{distal({{0, 400, 100, 90},
                                      {0, 0, 500, 0},
                                      {0, 0, 80, 90},
                                      {0, 450, 0, -90},
                                      {0, 0, 60, 90},
                                      {0, 100, 0, 0}}),
                              distal({{0, 400, 100, 90},
                                      {0, 0, 500, 0},
                                      {0, 0, 80, 90},
                                      {0, 450, 0, -90},
                                      {0, 70, 0, 90},
                                      {0, 100, 0, 0}}),
                              distal({{0, 400, 100, 90},
                                      {0, 0, 500, 0},
                                      {0, 0, 80, 90},
                                      {0, 450, 0, -60},
                                      {0, 70, 0, 60},
                                      {0, 100, 0, 0}}),
                              distal({{0, 400, 100, 90},
                                      {0, 0, 500, 0},
                                      {0, 0, 80, 90},
                                      {0, 450, 0, -90},
                                      {0, 0, 0.001, 90},
                                      {0, 100, 0, 0}})};
  for (const Arm& arm : arms) CHECK(only_even(check_round_trips(arm, 60, draw), 16));
}

TEST_CASE("round trips: general arms of six joints") {
  Draw draw;
  std::map<std::size_t, int> counts;
  for (int i = 0; i < 40; ++i) {
    for (const auto& [count, times] : check_round_trips(general_arm(draw), 8, draw)) counts[count] += times;
  }
  CHECK(only_even(counts, 16));
  CHECK(counts.size() >= 4);
}

TEST_CASE("round trips: the sixteen-solution arm shows multiples of four") {
  // Seen with 400 poses by independent means: 4, 8, 12 or 16.
  Draw draw;
  for (const auto& [count, times] : check_round_trips(sixteen_solutions_arm(), 100, draw))
    CHECK(count % 4 == 0);
}

TEST_CASE("round trips: special geometries that defeat most eliminations") {
  Draw draw;
  const std::vector<Arm> arms{
      // axes meet or are perpendicular in pairs
      distal(
          {{0, 0, 0, 90}, {0, 0, 300, 0}, {0, 50, 0, 90}, {0, 300, 0, 90}, {0, 0, 200, 0}, {0, 40, 0, 90}}),
      // the first three parallel
      distal({{0, 100, 300, 0},
              {0, 0, 250, 0},
              {0, 50, 20, 90},
              {0, 100, 30, 90},
              {0, 20, 50, 90},
              {0, 40, 0, 0}}),
      // all right angles, all apart
      distal({{0, 100, 30, 90},
              {0, 60, 25, 90},
              {0, 50, 20, 90},
              {0, 100, 10, 90},
              {0, 20, 35, 90},
              {0, 40, 0, 0}}),
      // the last three parallel
      distal({{0, 300, 50, 90},
              {0, 60, 100, 90},
              {0, 30, 50, 70},
              {0, 0, 260, 0},
              {0, 0, 220, 0},
              {0, 40, 0, 0}}),
      // axes 3, 4, 5 meet
      distal({{0, 300, 50, 90},
              {0, 60, 300, 0},
              {0, 30, 100, 90},
              {0, 0, 0, 90},
              {0, 0, 0, 90},
              {0, 300, 80, 0}}),
      // axes 2, 3, 4 meet
      distal({{0, 300, 50, 90},
              {0, 0, 0, 90},
              {0, 0, 0, 90},
              {0, 300, 100, 90},
              {0, 30, 80, 40},
              {0, 50, 80, 0}})};
  for (const Arm& arm : arms) check_round_trips(arm, 60, draw);
}

TEST_CASE("round trips: fewer joints than the pose binds") {
  Draw draw;
  for (int joints = 1; joints <= 5; ++joints) {
    CAPTURE(joints);
    for (int i = 0; i < 8; ++i) check_round_trips(general_arm(draw, joints), 5, draw);
  }
  check_round_trips(planar_three(400, 300, 200), 40, draw);
  // Five joints, three parallel, as for welding: the last turns the tool about itself.
  check_round_trips(distal({{0, 300, 0, 90}, {0, 0, 400, 0}, {0, 0, 350, 0}, {0, 0, 0, 90}, {0, 120, 0, 0}}),
                    40, draw);
}

TEST_CASE("round trips: freer orientation, square") {
  Draw draw;
  for (int i = 0; i < 15; ++i) {
    check_round_trips(general_arm(draw, 5), 8, draw, true, Orientation::axis);
    check_round_trips(general_arm(draw, 3), 8, draw, true, Orientation::free);
  }
  check_round_trips(anthropomorphic(), 50, draw, true, Orientation::free);
  check_round_trips(cuspidal_three(), 50, draw, true, Orientation::free);
}

TEST_CASE("a configuration of every kind near a singularity is found again") {
  Draw draw;
  struct Near {
    Arm arm;
    int joint;
    double value;
  };
  const Arm offset = distal(
      {{0, 400, 100, 90}, {0, 0, 500, 0}, {0, 0, 80, 90}, {0, 450, 0, -90}, {0, 0, 60, 90}, {0, 100, 0, 0}});
  for (const auto& [arm, joint, value] :
       {Near{spherical_wrist_arm(), 2, pi / 2}, Near{spherical_wrist_arm(), 4, 0}, Near{craig_arm(), 4, 0},
        Near{three_parallel_arm(), 2, 0}, Near{three_parallel_arm(), 4, 0}, Near{offset, 4, 0},
        Near{offset, 4, pi / 2}, Near{offset, 2, pi / 2}, Near{sixteen_solutions_arm(), 4, 0}}) {
    const ConfigurationFinder finder(arm);
    const Chain chain(arm);
    for (int k = 0; k < 150; ++k) {
      JointVector q = random_joints(arm, draw);
      const double distance = std::pow(10, draw(-15, 0));
      q[joint] = value + (draw(-1, 1) < 0 ? -distance : distance);
      const Pose target = chain.forward(q);
      const Configurations found = finder.find(target);
      CAPTURE(distance);
      CHECK_FALSE(found.joints.empty());
      check_promises(arm, target, found);
      // Nearer than this to a straight wrist the pose's own rounding hides joint 4.
      if (value != 0 || distance > 1e-10) CHECK(contains(arm, found, q, 1e-4));
    }
  }
}

TEST_CASE("the same call gives the same bits") {
  Draw draw;
  for (const Arm& arm : {general_arm(draw), spherical_wrist_arm(), planar_three(3, 2, 1)}) {
    const Pose target = Chain(arm).forward(random_joints(arm, draw));
    const Configurations first = ConfigurationFinder(arm).find(target);
    const Configurations second = ConfigurationFinder(arm).find(target);
    REQUIRE(first.joints.size() == second.joints.size());
    for (std::size_t i = 0; i < first.joints.size(); ++i) CHECK(first.joints[i] == second.joints[i]);
  }
}
