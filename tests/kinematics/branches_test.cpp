#include "pathvet/kinematics/branches.hpp"

#include <doctest/doctest.h>
#include <Eigen/LU>
#include <functional>
#include <random>

#include "kinematics/reference_arms.hpp"

using namespace pathvet;
using namespace pathvet::test;

namespace {

constexpr unsigned seed = 20240517;

JointVector random_joints(std::mt19937& random, int count) {
  std::uniform_real_distribution<double> angle(-pi, pi);
  JointVector q(count);
  for (double& value : q) value = angle(random);
  return q;
}

double determinant(const Arm& arm, const JointVector& q) {
  return Eigen::Matrix<double, 6, 6>(Chain(arm).jacobian(q)).determinant();
}

using Factors = std::function<std::array<double, 3>(const JointVector&)>;

/// The factors are the textbook's over the characteristic length, sign included, and their product is
/// proportional to the determinant.
void check_textbook(const Arm& arm, double constant, double elbow_scale, const Factors& textbook) {
  const BranchAnalysis analysis(arm);
  REQUIRE(analysis.kind() == BranchAnalysis::Kind::factored);
  CHECK(analysis.count() == 3);
  std::mt19937 random(seed);
  const double length = arm.characteristic_length;
  for (int i = 0; i < 50; ++i) {
    const JointVector q = random_joints(random, 6);
    const auto [shoulder, elbow, wrist] = textbook(q);
    const std::array<double, 3> ours = analysis.factors(q);
    CHECK(ours[0] * length == doctest::Approx(shoulder).epsilon(1e-9));
    CHECK(ours[1] * length * length == doctest::Approx(elbow_scale * elbow).epsilon(1e-9));
    CHECK(ours[2] == doctest::Approx(wrist).epsilon(1e-9));
    CHECK(determinant(arm, q) == doctest::Approx(constant * shoulder * elbow * wrist).epsilon(1e-7));
    const std::string signs = analysis.signs(q);
    CHECK(signs == std::string{shoulder < 0 ? '-' : '+', elbow < 0 ? '-' : '+', wrist < 0 ? '-' : '+'});
  }
}

}  // namespace

TEST_CASE("factors of the anthropomorphic arm with spherical wrist") {
  // Siciliano et al., Robotics: Modelling, Planning and Control, sections 2.9.7 and 3.3 (from memory):
  // det J = -a2 d4 c3 (a2 c2 + d4 s23) s5.
  check_textbook(spherical_wrist_arm(), -500 * 400, 500 * 400, [](const JointVector& q) {
    return std::array<double, 3>{500 * std::cos(q[1]) + 400 * std::sin(q[1] + q[2]), std::cos(q[2]),
                                 std::sin(q[4])};
  });
}

TEST_CASE("factors of the arm of Craig, section 3.7") {
  // Factorisation derived: det J = -a2 (d4 c3 + a3 s3)(a2 c2 + a3 c23 - d4 s23) s5. The book's x axis after
  // joint 1 points along z_2 x z_1: the shoulder's sign is turned.
  check_textbook(craig_arm(430, 20, 125, 432), 430, 430, [](const JointVector& q) {
    return std::array<double, 3>{
        -430 * std::cos(q[1]) - 20 * std::cos(q[1] + q[2]) + 432 * std::sin(q[1] + q[2]),
        432 * std::cos(q[2]) + 20 * std::sin(q[2]), std::sin(q[4])};
  });
}

TEST_CASE("factors of an arm of the same kind in distal parameters") {
  // Derived and recomputed: det J = a2 (d4 c3 + a3 s3)(a2 c2 + a3 c23 - d4 s23) s5.
  check_textbook(distal_craig_arm(), 431.8, 431.8, [](const JointVector& q) {
    return std::array<double, 3>{
        431.8 * std::cos(q[1]) + 20.3 * std::cos(q[1] + q[2]) - 431.8 * std::sin(q[1] + q[2]),
        431.8 * std::cos(q[2]) + 20.3 * std::sin(q[2]), std::sin(q[4])};
  });
}

TEST_CASE("factors of the arm with three parallel axes") {
  // Arm: Lynch & Park, Modern Robotics, example 4.5 (from memory). Derived: det J = a2 a3 s3 s5 (a2 c2 + a3
  // c23 + d5 s234), a2 = -425, a3 = -392, d5 = 95.
  check_textbook(three_parallel_arm(), 425 * 392, 425 * 392, [](const JointVector& q) {
    return std::array<double, 3>{
        -425 * std::cos(q[1]) - 392 * std::cos(q[1] + q[2]) + 95 * std::sin(q[1] + q[2] + q[3]),
        std::sin(q[2]), std::sin(q[4])};
  });
}

TEST_CASE("signs of the eight configurations of one pose") {
  const BranchAnalysis analysis(
      spherical_wrist_arm());  // table 2.4 of the reference values, recomputed there
  CHECK(analysis.signs(degrees({30, 40, 50, -20, 35, 60})) == "+++");
  CHECK(analysis.signs(degrees({30, 40, 50, 160, -35, -120})) == "++-");
  CHECK(analysis.signs(degrees({30, 4.63169, 130, -134.37342, 15.92912, 178.89325})) == "+-+");
  CHECK(analysis.signs(degrees({30, 4.63169, 130, 45.62658, -15.92912, -1.10675})) == "+--");
  CHECK(analysis.signs(degrees({-150, 140, 130, 160, 35, 60})) == "--+");
  CHECK(analysis.signs(degrees({-150, 140, 130, -20, -35, -120})) == "---");
  CHECK(analysis.signs(degrees({-150, 175.36831, 50, 45.62658, 15.92912, 178.89325})) == "-++");
  CHECK(analysis.signs(degrees({-150, 175.36831, 50, -134.37342, -15.92912, -1.10675})) == "-+-");
}

TEST_CASE("base and tool change no factor") {
  Arm moved = spherical_wrist_arm();
  moved.base = {rotation_from_vector(Vector3(0.3, -1.2, 0.8)), Vector3(900, -300, 150)};
  const BranchAnalysis plain(spherical_wrist_arm());
  const BranchAnalysis other(moved, Orientation::full,
                             {rotation_from_vector(Vector3(1, 2, 0)), Vector3(50, 20, 180)});
  REQUIRE(other.kind() == BranchAnalysis::Kind::factored);
  std::mt19937 random(seed);
  for (int i = 0; i < 20; ++i) {
    const JointVector q = random_joints(random, 6);
    for (std::size_t k = 0; k < 3; ++k) CHECK(other.factors(q)[k] == doctest::Approx(plain.factors(q)[k]));
  }
}

TEST_CASE("a shoulder offset of any kind still factors") {
  // Axis 1 neither meets axis 2 nor stands at a right angle to it: the determinant factors as long as 2 and 3
  // are parallel (derived in branches.hpp's terms); the analysis has to confirm it by itself.
  const Arm arm = distal({{0, 300, 120, 65},
                          {0, 40, 500, 0},
                          {0, 30, 80, 90},
                          {0, 420, 0, -70},
                          {0, 0, 0, 80},
                          {0, 90, 20, 30}});
  const BranchAnalysis analysis(arm);
  REQUIRE(analysis.kind() == BranchAnalysis::Kind::factored);
  std::mt19937 random(seed);
  double constant = 0;
  for (int i = 0; i < 20; ++i) {
    const JointVector q = random_joints(random, 6);
    const auto f = analysis.factors(q);
    const double ratio = determinant(arm, q) / (f[0] * f[1] * f[2]);
    if (i == 0) constant = ratio;
    CHECK(ratio == doctest::Approx(constant).epsilon(1e-7));
  }
}

TEST_CASE("arms whose determinant does not factor have its one sign") {
  for (const Arm& arm : {sixteen_solutions_arm(),
                         // spherical wrist, but axes 2 and 3 cross
                         distal({{0, 0, 0, 90},
                                 {0, 0, 300, 90},
                                 {0, 50, 40, 90},
                                 {0, 400, 0, -90},
                                 {0, 0, 0, 90},
                                 {0, 100, 0, 0}}),
                         // wrist axes 0.01 mm apart
                         distal({{0, 0, 0, 90},
                                 {0, 0, 500, 0},
                                 {0, 0, 0, 90},
                                 {0, 400, 0, -90},
                                 {0, 0, 0.01, 90},
                                 {0, 100, 0, 0}})}) {
    const BranchAnalysis analysis(arm);
    REQUIRE(analysis.kind() == BranchAnalysis::Kind::determinant);
    CHECK(analysis.count() == 1);
    std::mt19937 random(seed);
    for (int i = 0; i < 20; ++i) {
      const JointVector q = random_joints(random, 6);
      const double scale = std::pow(arm.characteristic_length, 3);
      CHECK(analysis.factors(q)[0] == doctest::Approx(determinant(arm, q) / scale));
      CHECK(analysis.signs(q) == (determinant(arm, q) < 0 ? "-" : "+"));
    }
  }
}

TEST_CASE("determinants of fewer bound directions") {
  SUBCASE("position of the anthropomorphic arm") {
    // Siciliano et al., section 3.2.1 (from memory): det J_P = -a2 a3 s3 (a2 c2 + a3 c23); value of case 1.3.
    const Arm arm = anthropomorphic();
    const BranchAnalysis analysis(arm, Orientation::free);
    REQUIRE(analysis.kind() == BranchAnalysis::Kind::determinant);
    const double scale = std::pow(arm.characteristic_length, 3);
    CHECK(analysis.factors(degrees({30, 40, -60}))[0] * scale ==
          doctest::Approx(131445209.325).epsilon(1e-9));
  }
  SUBCASE(
      "position and tool axis with five joints: the determinant of the six when the turn about z is added") {
    // With a sixth joint about the tool's z axis the 6 x 6 determinant is that of the five rows.
    const Arm five =
        distal({{0, 300, 50, 80}, {0, 20, 400, 10}, {0, 30, 350, 50}, {0, 40, 20, 90}, {0, 120, 60, 70}});
    const BranchAnalysis analysis(five, Orientation::axis);
    REQUIRE(analysis.kind() == BranchAnalysis::Kind::determinant);
    Arm six = five;
    add_joint(six, {}, {}, 0);
    std::mt19937 random(seed);
    for (int i = 0; i < 20; ++i) {
      const JointVector q = random_joints(random, 6);
      const double scale = std::pow(five.characteristic_length, 3);
      CHECK(analysis.factors(q.head(5))[0] * scale == doctest::Approx(determinant(six, q)));
    }
  }
  SUBCASE("not square: no branch") {
    for (const auto& analysis : {BranchAnalysis(spherical_wrist_arm(), Orientation::axis),
                                 BranchAnalysis(anthropomorphic(), Orientation::full)}) {
      CHECK(analysis.kind() == BranchAnalysis::Kind::none);
      CHECK(analysis.count() == 0);
      CHECK(analysis.signs(JointVector::Zero(6)).empty());
    }
  }
}

TEST_CASE("two solutions of a cuspidal arm share their sign") {
  // Wenger's orthogonal arm; configurations and determinants of case 2.8 (from memory, recomputed there).
  const Arm arm = cuspidal_three();
  const BranchAnalysis analysis(arm, Orientation::free);
  const double scale = std::pow(arm.characteristic_length, 3) / 1e6;
  CHECK(analysis.factors(degrees({-165.310064, -171.678226, -14.123922}))[0] * scale ==
        doctest::Approx(6.210299).epsilon(1e-6));
  CHECK(analysis.factors(degrees({-101.985672, -161.782199, 105.492391}))[0] * scale ==
        doctest::Approx(-2.688753).epsilon(1e-6));
  CHECK(analysis.signs(degrees({-165.310064, -171.678226, -14.123922})) ==
        analysis.signs(degrees({-49.469294, -38.675972, 143.123202})));
}

TEST_CASE("a factor of exactly zero counts as plus") {
  // Joint 5 at zero: its sine is exactly zero in this arm.
  const BranchAnalysis analysis(spherical_wrist_arm());
  const JointVector q = degrees({0, 0, 0, 0, 0, 0});
  CHECK(std::abs(analysis.factors(q)[2]) < 1e-15);
  CHECK(BranchAnalysis(planar_three(3, 2, 1), Orientation::free).signs(degrees({10, 20, 30})) == "+");
}
