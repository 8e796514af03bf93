#include "pathvet/kinematics/configurations.hpp"

#include <doctest/doctest.h>

#include "kinematics/configuration_checks.hpp"

using namespace pathvet;
using namespace pathvet::test;

// Numbers of cases as in the project's list of reference values. Where a case names a book without "read", it
// is from memory; all values were recomputed by independent means (multi-start, elimination in another
// language).

namespace {

Configurations find(const Arm& arm, const Pose& target, Orientation orientation = Orientation::full) {
  const Configurations found = ConfigurationFinder(arm).find(target, orientation);
  check_promises(arm, target, found, orientation);
  return found;
}

Pose placed(double x, double y, double z, const Matrix3& rotation = Matrix3::Identity()) {
  return {rotation, Vector3(x, y, z)};
}

}  // namespace

TEST_CASE("2.1 planar arm of three links") {
  // Lynch & Park, Modern Robotics, exercise 6.1 (read as quoted in a public repository).
  const Arm arm = planar_three(3, 2, 1);
  const Configurations found = find(arm, placed(4, 2, 0));
  CHECK(found.complete);
  check_exactly(arm, found, {{0, 90, -90}, {67.380135, -90, 22.619865}});
}

TEST_CASE("2.2 planar arm at the border of its reach and beyond") {
  // Craig, Introduction to Robotics, exercises (lengths 4, 3, 2; from memory).
  const Arm arm = planar_three(4, 3, 2);
  check_exactly(arm, find(arm, placed(9, 0, 0)), {{0, 0, 0}});
  check_exactly(arm, find(arm, placed(-3, 2, 0, turn(Vector3::UnitZ(), -90).rotation)),
                {{90, 90, -270}, {163.739795, -90, -163.739795}});
  const Configurations none = find(arm, placed(-3.1245, 9.1674, 0, turn(Vector3::UnitZ(), -30).rotation));
  CHECK(none.joints.empty());
  CHECK(none.complete);
}

TEST_CASE("2.3 anthropomorphic arm, position alone") {
  // Siciliano et al., section 2.12.4 (from memory): four.
  const Arm arm = anthropomorphic();
  const Configurations found = find(arm, Chain(arm).forward(degrees({30, 40, -60})), Orientation::free);
  CHECK(found.complete);
  check_exactly(arm, found, {{30, 40, -60}, {30, -12.659007, 60}, {-150, 140, 60}, {-150, -167.340993, -60}});
}

TEST_CASE("2.4 anthropomorphic arm with spherical wrist") {
  const Arm arm = spherical_wrist_arm();
  const Configurations found = find(arm, Chain(arm).forward(degrees({30, 40, 50, -20, 35, 60})));
  CHECK(found.complete);
  check_exactly(arm, found,
                {{30, 40, 50, -20, 35, 60},
                 {30, 40, 50, 160, -35, -120},
                 {30, 4.63169, 130, -134.37342, 15.92912, 178.89325},
                 {30, 4.63169, 130, 45.62658, -15.92912, -1.10675},
                 {-150, 140, 130, 160, 35, 60},
                 {-150, 140, 130, -20, -35, -120},
                 {-150, 175.36831, 50, 45.62658, 15.92912, 178.89325},
                 {-150, 175.36831, 50, -134.37342, -15.92912, -1.10675}});
}

TEST_CASE("2.5 arm with shoulder and elbow offset") {
  const Arm arm = distal_craig_arm();
  const Configurations found = find(arm, Chain(arm).forward(degrees({0, 45, 180, 0, 45, 0})));
  CHECK(found.complete);
  check_exactly(arm, found,
                {{0, 45, 180, 0, 45, 0},
                 {0, 45, 180, 180, -45, 180},
                 {0, -47.757927, 5.383273, 0, -47.625346, 0},
                 {0, -47.757927, 5.383273, 180, 47.625346, 180},
                 {151.751379, -132.242073, 180, 38.632611, 49.296731, 152.471211},
                 {151.751379, -132.242073, 180, -141.367389, -49.296731, -27.528789},
                 {151.751379, 135, 5.383273, -34.895033, -55.826119, -158.605780},
                 {151.751379, 135, 5.383273, 145.104967, 55.826119, 21.394220}});
  // Corke, Robotics, Vision and Control, ch. 7 (from memory, four digits): one of them in radians.
  JointVector printed(6);
  printed << 2.6486, -3.9270, 0.0940, 2.5326, 0.9743, 0.3734;
  CHECK(contains(arm, found, printed, 1e-4));
}

TEST_CASE("2.6 arm with three parallel axes") {
  const Arm arm = three_parallel_arm();
  const Pose target{
      Eigen::Quaterniond(0.164500253, 0.225894155, 0.482146741, 0.830328861).normalized().toRotationMatrix(),
      Vector3(550.479140, 359.984687, 373.533906)};
  const Pose forward = Chain(arm).forward(degrees({20, -70, 80, -40, 60, 30}));
  CHECK((forward.position - target.position).norm() < 1e-5);
  CHECK((forward.rotation - target.rotation).norm() < 1e-8);
  const Configurations found = find(arm, forward);
  CHECK(found.complete);
  check_exactly(arm, found,
                {{20, -70, 80, -40, 60, 30},
                 {20, 6.117676, -80, 43.882324, 60, 30},
                 {20, -50.659998, 75.060428, 125.599570, -60, -150},
                 {20, 20.846084, -75.060428, -155.785656, -60, -150},
                 {-138.673571, 158.366754, 76.468651, -28.647912, 101.127975, -160.680073},
                 {-138.673571, -128.810163, -76.468651, 51.466306, 101.127975, -160.680073},
                 {-138.673571, 174.491189, 78.610892, 133.085411, -101.127975, 19.319927},
                 {-138.673571, -110.685694, -78.610892, -144.515922, -101.127975, 19.319927}});
}

TEST_CASE("2.7 the arm with sixteen configurations") {
  // Manseur & Doty 1989, also in Raghavan & Roth 1993 (parameters and pose from memory; sixteen found
  // independently).
  const Arm arm = sixteen_solutions_arm();
  const Pose target{
      Eigen::Quaterniond(0.285237297, -0.196420815, 0.647023780, 0.679278129).normalized().toRotationMatrix(),
      Vector3(-1140.175, 0, 0)};
  const Configurations found = find(arm, target);
  CHECK(found.complete);
  std::vector<std::array<double, 6>> rows{{-178.1262, 108.1916, 32.2662, -174.3068, -15.3254, -0.4195},
                                          {2.5172, 108.0759, 112.0431, -10.5230, 0.0051, -0.1095},
                                          {-120.7884, 172.3344, 0.9272, 148.6680, -33.2848, -37.1791},
                                          {88.6785, -176.7247, 3.2709, -116.7581, 22.8041, -39.5633},
                                          {-96.2845, -6.2736, 179.9689, 38.4860, 52.5499, -39.4047},
                                          {113.8436, 5.3064, -177.7443, -55.9242, -62.9848, -43.3773},
                                          {-12.9429, -105.0963, -114.9754, 3.0235, 7.4170, -79.4218},
                                          {168.3219, -103.8922, -33.3962, -162.7591, -8.1208, -81.8349}};
  CHECK(found.joints.size() == 16);
  for (const auto& [a, b, c, d, e, f] : rows) {
    CHECK(contains(arm, found, degrees({a, b, c, d, e, f}), 1e-3 * radians_per_degree));
    CHECK(
        contains(arm, found, degrees({a, b, c + 180, 180 - d, 180 - e, f + 180}), 1e-3 * radians_per_degree));
  }
}

TEST_CASE("2.8 cuspidal arm, position alone") {
  // Wenger (from memory): four configurations, three of them close in sign.
  const Arm arm = cuspidal_three();
  const Configurations found = find(arm, placed(250, 0, 50), Orientation::free);
  CHECK(found.complete);
  check_exactly(arm, found,
                {{-165.310064, -171.678226, -14.123922},
                 {-101.985672, -161.782199, 105.492391},
                 {-49.469294, -38.675972, 143.123202},
                 {9.895133, -18.870835, -107.621774}});
}

TEST_CASE("out of reach there is nothing, and that is certain") {
  for (const Arm& arm : {spherical_wrist_arm(), three_parallel_arm(), sixteen_solutions_arm()}) {
    const Configurations found = find(arm, placed(9000, 100, 0));
    CHECK(found.joints.empty());
    CHECK(found.complete);
  }
}

TEST_CASE("at the border of the reach two configurations become one") {
  // Common practice, no source: the wrist centre at full stretch, 900 from the shoulder.
  const Arm arm = spherical_wrist_arm();
  const JointVector stretched = degrees({30, 40, 90, -20, 35, 60});
  const Pose border = Chain(arm).forward(stretched);
  const Configurations found = find(arm, border);
  CHECK(found.joints.size() == 4);  // elbow up and down are one
  CHECK(contains(arm, found, stretched, 1e-6));
  const Vector3 outwards = Chain(arm).skeleton(stretched).col(4) - Chain(arm).skeleton(stretched).col(1);
  Pose beyond = border;
  beyond.position += 1e-6 * outwards;
  CHECK(find(arm, beyond).joints.empty());
  Pose within = border;
  within.position -= 1e-6 * outwards;
  CHECK(find(arm, within).joints.size() == 8);
}

TEST_CASE("at a straight wrist one configuration stands for the continuum") {
  const Arm arm = spherical_wrist_arm();
  const Configurations found = find(arm, Chain(arm).forward(degrees({30, 40, 50, -20, 0, 60})));
  CHECK_FALSE(found.complete);
  // Two of the four places of joints 1 to 3 have a straight wrist (or none, beyond the first); those give one
  // each.
  CHECK(contains(arm, found, degrees({30, 40, 50, 0, 0, 40}), 1e-7));
  int straight = 0;
  for (const JointVector& q : found.joints) straight += apart(arm, q, degrees({30, 40, 50, 0, 0, 40})) < 1e-6;
  CHECK(straight == 1);
  // A hair beside the singularity both are there, and joint 4 is known.
  const JointVector near = degrees({30, 40, 50, -20, 1e-7, 60});
  const Configurations beside = find(arm, Chain(arm).forward(near));
  CHECK(beside.complete);
  CHECK(contains(arm, beside, near, 1e-6));
  CHECK(contains(arm, beside, degrees({30, 40, 50, 160, -1e-7, -120}), 1e-6));
}

TEST_CASE("wrist centre on the first axis: joint 1 is free, zero stands for it") {
  const Arm arm = spherical_wrist_arm();
  JointVector q = degrees({30, 40, 0, -20, 35, 60});
  q[2] = pi - std::asin(-500 * std::cos(q[1]) / 400) - q[1];  // a2 c2 + d4 s23 = 0
  const Configurations found = find(arm, Chain(arm).forward(q));
  CHECK_FALSE(found.complete);
  CHECK_FALSE(found.joints.empty());
}

TEST_CASE("the tool moves the TCP") {
  const Arm arm = sixteen_solutions_arm();
  const Pose tool{rotation_from_roll_pitch_yaw(0.1, 0.6, -0.3), Vector3(20, -30, 180)};
  const JointVector q = degrees({10, -40, 70, 20, 50, -110});
  const Configurations found = ConfigurationFinder(arm, tool).find(Chain(arm, tool).forward(q));
  CHECK(contains(arm, found, q, 1e-8));
}
