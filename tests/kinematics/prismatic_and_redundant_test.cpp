#include <doctest/doctest.h>

#include <algorithm>

#include "kinematics/configuration_checks.hpp"

using namespace pathvet;
using namespace pathvet::test;

// Common practice, no source, unless a case says so. Seed 1973 throughout.

namespace {

constexpr unsigned seed = 1973;

struct Counted {
  Arm arm;
  std::size_t count;
  Orientation orientation = Orientation::full;
};

JointVector random_joints(const Arm& arm, std::mt19937& random) {
  JointVector q(arm.joint_count());
  for (int i = 0; i < arm.joint_count(); ++i) {
    const Joint& joint = arm.joints[static_cast<std::size_t>(i)];
    q[i] = std::uniform_real_distribution<double>(joint.lower, joint.upper)(random);
  }
  return q;
}

Arm with_rail(const Arm& arm) {
  Arm out = distal({{90, 0, 0, 90}}, {0});
  out.joints[0].lower = -500;
  out.joints[0].upper = 1500;
  out.joints.insert(out.joints.end(), arm.joints.begin(), arm.joints.end());
  set_length(out);
  return out;
}

}  // namespace

TEST_CASE("arms with prismatic joints show the counts that their geometry gives") {
  const std::vector<Counted> arms{
      // two revolute, one prismatic, one revolute joint, all vertical: elbow left and right
      {distal({{0, 300, 350, 0}, {0, 0, 250, 180}, {0, 0, 0, 0}, {0, 50, 0, 0}}, {2}), 2},
      // spherical arm with spherical wrist: two shoulders, out and in, two wrists
      {distal(
           {{0, 400, 0, -90}, {0, 150, 0, 90}, {0, 0, 0, 0}, {0, 0, 0, -90}, {0, 0, 0, 90}, {0, 100, 0, 0}},
           {2}),
       8},
      // cylindrical arm with spherical wrist
      {distal({{0, 400, 0, 0}, {0, 0, 0, -90}, {0, 0, 0, 0}, {0, 0, 0, -90}, {0, 0, 0, 90}, {0, 100, 0, 0}},
              {1, 2}),
       4},
      // three prismatic joints and a spherical wrist
      {distal({{0, 0, 0, 90}, {90, 0, 0, 90}, {90, 0, 0, 0}, {0, 0, 0, -90}, {0, 0, 0, 90}, {0, 100, 0, 0}},
              {0, 1, 2}),
       2},
      // spherical arm of Siciliano et al., section 2.9.3, position alone
      {distal({{0, 0, 0, -90}, {0, 150, 0, 90}, {0, 0, 0, 0}}, {2}), 4, Orientation::free}};
  std::mt19937 random(seed);
  for (const auto& [arm, count, orientation] : arms) {
    const ConfigurationFinder finder(arm);
    for (int k = 0; k < 20; ++k) {
      const JointVector q = random_joints(arm, random);
      const Pose target = Chain(arm).forward(q);
      const Configurations found = finder.find(target, orientation);
      CHECK(found.joints.size() == count);
      CHECK(contains(arm, found, q, 1e-5));
      CHECK_FALSE(found.complete);
      check_promises(arm, target, found, orientation);
    }
  }
}

TEST_CASE("fewer joints than directions: the tracking tolerance counts") {
  const Arm arm = planar_three(400, 300, 200);
  const JointVector q = degrees({20, 50, -30});
  Pose target = Chain(arm).forward(q);
  target.position.z() += 0.9e-3;
  CHECK(ConfigurationFinder(arm).find(target).joints.size() == 2);
  target.position.z() += 0.3e-3;
  CHECK(ConfigurationFinder(arm).find(target).joints.empty());
}

TEST_CASE("a rail under an arm: representatives along the rail, every branch of the arm") {
  const Arm arm = with_rail(spherical_wrist_arm());
  JointVector q = degrees({0, 30, 40, 50, -20, 35, 60});
  q[0] = 450;
  const Pose target = Chain(arm).forward(q);
  const Configurations found = ConfigurationFinder(arm).find(target);
  CHECK_FALSE(found.complete);
  CHECK(found.joints.size() >= 16);
  check_promises(arm, target, found);
  for (const JointVector& one : found.joints) {
    CHECK(one[0] >= -500);
    CHECK(one[0] <= 1500);
  }
}

TEST_CASE("seven revolute joints") {
  // Arm of case 1.12 (read: the solver tests of Orocos KDL), metres times 1000.
  const Arm arm = proximal({{0, 0, 0, 360},
                            {90, 0, 0, 0},
                            {-90, 0, 0, 360},
                            {90, 0, 0, 0},
                            {-90, 0, 0, 360},
                            {90, 0, 0, 0},
                            {-90, 0, 0, 0}},
                           shift(0, 0, 155));
  const Pose target = Chain(arm).forward(degrees({10, 30, 40, 50, -20, 35, 60}));
  const Configurations found = ConfigurationFinder(arm).find(target);
  CHECK_FALSE(found.complete);
  CHECK(found.joints.size() == 64);  // eight places of joint 3 (or another), eight branches each
  check_promises(arm, target, found);
}

TEST_CASE("freer orientation with six joints: representatives that meet what binds") {
  const Arm arm = spherical_wrist_arm();
  const Pose target = Chain(arm).forward(degrees({30, 40, 50, -20, 35, 60}));
  for (const Orientation orientation : {Orientation::axis, Orientation::free}) {
    const Configurations found = ConfigurationFinder(arm).find(target, orientation);
    CHECK_FALSE(found.complete);
    CHECK(found.joints.size() == 64);
    check_promises(arm, target, found, orientation);
  }
  // The configuration that holds the whole pose is among those for the axis.
  CHECK(contains(arm, ConfigurationFinder(arm).find(target, Orientation::axis),
                 degrees({30, 40, 50, -20, 35, 60}), 1e-8));
}

TEST_CASE("a last joint that only turns the tool about its axis is free where that turn is") {
  const Arm arm = distal({{0, 300, 0, 90}, {0, 0, 400, 0}, {0, 0, 350, 0}, {0, 0, 0, 90}, {0, 120, 0, 0}});
  const JointVector q = degrees({20, 50, -40, 70, 30});
  const Pose target = Chain(arm).forward(q);
  const Configurations found = ConfigurationFinder(arm).find(target, Orientation::axis);
  CHECK_FALSE(found.complete);
  check_promises(arm, target, found, Orientation::axis);
  bool has = false;
  for (const JointVector& one : found.joints)
    has = has || (one.head(4) - q.head(4)).cwiseAbs().maxCoeff() < 1e-7;
  CHECK(has);
  CHECK(found.joints.size() == 32);  // eight places of the free joint, four configurations of the others
  std::vector<double> places;
  for (const JointVector& one : found.joints) {
    const auto known = [&](double place) { return std::abs(place - one[4]) < 1e-9; };
    if (std::none_of(places.begin(), places.end(), known)) places.push_back(one[4]);
  }
  CHECK(places.size() == 8);
}

TEST_CASE("an arm that is singular everywhere is searched, and nothing is claimed") {
  const std::vector<Arm> arms{// four parallel axes
                              distal({{0, 300, 50, 90},
                                      {0, 0, 300, 0},
                                      {0, 0, 250, 0},
                                      {0, 20, 200, 0},
                                      {0, 30, 40, 90},
                                      {0, 40, 0, 0}}),
                              // four axes through one point
                              distal({{0, 0, 0, 90},
                                      {0, 0, 0, -90},
                                      {0, 0, 0, 90},
                                      {0, -254, 0, -90},
                                      {0, 0, 57, 90},
                                      {0, 0, -320, -90}})};
  for (const Arm& arm : arms) {
    const JointVector q = degrees({20, 50, -40, 70, 30, -60});
    const Pose target = Chain(arm).forward(q);
    const Configurations found = ConfigurationFinder(arm).find(target);
    CHECK_FALSE(found.complete);
    CHECK_FALSE(found.joints.empty());
    check_promises(arm, target, found);
  }
}
