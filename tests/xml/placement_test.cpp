#include "xml/placement.hpp"

#include <doctest/doctest.h>

#include <cmath>
#include <random>

#include "broken_inputs.hpp"
#include "pathvet/model/units.hpp"

namespace pathvet {
namespace {

constexpr double rounding = 4e-16;  // a few units in the last place of 1

struct Placed {
  std::optional<Pose> pose;
  std::string faults;
};

/// The placement that `attributes` spell.
Placed placed(const std::string& attributes) {
  xml::Document document("<pose " + attributes + "/>", "x");
  const auto root = document.root("pose");
  if (!root) return {{}, test::listed(document.faults_in_order())};
  xml::expect_placement(*root);
  std::optional<Pose> pose = xml::read_placement(*root);
  return {pose, test::listed(document.faults_in_order())};
}

double difference(const Matrix3& one, const Matrix3& other) {
  return (one - other).cwiseAbs().maxCoeff();
}

Matrix3 matrix(std::initializer_list<double> rows) {
  Matrix3 m;
  int i = 0;
  for (const double value : rows) {
    m(i / 3, i % 3) = value;
    ++i;
  }
  return m;
}

Matrix3 turn(double degrees, const Vector3& axis) {
  return Eigen::AngleAxisd(degrees * radians_per_degree, axis.normalized()).toRotationMatrix();
}

TEST_CASE("what a placement leaves out is zero or identity") {
  const Placed nothing = placed("");
  CHECK(nothing.faults == "");
  REQUIRE(nothing.pose);
  CHECK(nothing.pose->position == Vector3::Zero());
  CHECK(nothing.pose->rotation == Matrix3::Identity());
  const Placed position = placed("position='1 -2 3.5'");
  REQUIRE(position.pose);
  CHECK(position.pose->position == Vector3(1, -2, 3.5));
}

TEST_CASE("a quarter turn about z, in every spelling, sends x to y") {
  const Matrix3 expected = matrix({0, -1, 0, 1, 0, 0, 0, 0, 1});
  for (const char* spelling :
       {"quaternion='0.7071067811865476 0 0 0.7071067811865476'",
        "quaternion='-0.7071067811865476 0 0 -0.7071067811865476'", "roll-pitch-yaw='0 0 90'",
        "rotation-vector='0 0 90'", "rotation-vector='0 0 -270'"}) {
    CAPTURE(spelling);
    const Placed read = placed(spelling);
    CHECK(read.faults == "");
    REQUIRE(read.pose);
    CHECK(difference(read.pose->rotation, expected) < rounding);
  }
}

TEST_CASE("roll-pitch-yaw is Rz(yaw) Ry(pitch) Rx(roll)") {
  const Placed read = placed("roll-pitch-yaw='10 20 30'");
  REQUIRE(read.pose);
  const Matrix3 expected =
      turn(30, Vector3::UnitZ()) * turn(20, Vector3::UnitY()) * turn(10, Vector3::UnitX());
  CHECK(difference(read.pose->rotation, expected) < rounding);
}

TEST_CASE("a quaternion is w x y z") {
  const Placed read = placed("quaternion='0.8 0 0.6 0'");  // 2 acos 0.8 about y: cosine 0.28, sine 0.96
  REQUIRE(read.pose);
  CHECK(difference(read.pose->rotation, matrix({0.28, 0, 0.96, 0, 1, 0, -0.96, 0, 0.28})) < rounding);
}

TEST_CASE("a quaternion is normalised within its tolerance and refused beyond it") {
  const Placed near = placed("quaternion='0 0 0 1.0009'");
  REQUIRE(near.pose);
  CHECK(difference(near.pose->rotation, matrix({-1, 0, 0, 0, -1, 0, 0, 0, 1})) < rounding);
  CHECK(placed("quaternion='0.9991 0 0 0'").faults == "");
  CHECK(placed("quaternion='0 0 0 1.0011'").faults ==
        "1:7: quaternion of <pose> has norm 1.0011; expected 1 within 0.001");
  CHECK(placed("quaternion='0.9989 0 0 0'").faults ==
        "1:7: quaternion of <pose> has norm 0.9989; expected 1 within 0.001");
  CHECK(placed("quaternion='0 0 0 0'").faults ==
        "1:7: quaternion of <pose> has norm 0; expected 1 within 0.001");
}

TEST_CASE("rotation vectors of any length are rotations about their axis") {
  constexpr unsigned seed = 20240611;
  MESSAGE("seed ", seed);
  std::mt19937 random(seed);
  std::normal_distribution<double> normal;
  std::uniform_real_distribution<double> exponent(-12, 3);
  for (int i = 0; i < 1000; ++i) {
    const Vector3 axis = Vector3(normal(random), normal(random), normal(random)).normalized();
    const double degrees = std::pow(10.0, exponent(random));
    // Above one turn the reference itself loses digits of the angle.
    const double tolerance = rounding * (2 + degrees / 100);
    CHECK(difference(xml::rotation_from_vector_degrees(degrees * axis), turn(degrees, axis)) < tolerance);
  }
  CHECK(xml::rotation_from_vector_degrees(Vector3::Zero()) == Matrix3::Identity());
  CHECK(difference(xml::rotation_from_vector_degrees({0, 180, 0}), matrix({-1, 0, 0, 0, 1, 0, 0, 0, -1})) ==
        0);
}

TEST_CASE("multiples of 90 degrees are exact, in all quadrants and turns") {
  CHECK(xml::rotation_x(90) == matrix({1, 0, 0, 0, 0, -1, 0, 1, 0}));
  CHECK(xml::rotation_x(-90) == matrix({1, 0, 0, 0, 0, 1, 0, -1, 0}));
  CHECK(xml::rotation_y(90) == matrix({0, 0, 1, 0, 1, 0, -1, 0, 0}));
  CHECK(xml::rotation_z(180) == matrix({-1, 0, 0, 0, -1, 0, 0, 0, 1}));
  CHECK(xml::rotation_z(-270) == xml::rotation_z(90));
  CHECK(xml::rotation_z(360 * 12345.0) == Matrix3::Identity());
  for (double degrees = -720; degrees <= 720; degrees += 7.5) {
    CAPTURE(degrees);
    CHECK(difference(xml::rotation_x(degrees), turn(degrees, Vector3::UnitX())) < 4 * rounding);
    CHECK(difference(xml::rotation_y(degrees), turn(degrees, Vector3::UnitY())) < 4 * rounding);
    CHECK(difference(xml::rotation_z(degrees), turn(degrees, Vector3::UnitZ())) < 4 * rounding);
  }
}

TEST_CASE("z is turned into any axis by a rotation") {
  constexpr unsigned seed = 77;
  MESSAGE("seed ", seed);
  std::mt19937 random(seed);
  std::normal_distribution<double> normal;
  std::vector<Vector3> axes{Vector3::UnitX(), Vector3::UnitY(), Vector3::UnitZ(), -Vector3::UnitZ(),
                            Vector3(1e-9, 0, -1).normalized()};
  for (int i = 0; i < 200; ++i)
    axes.push_back(Vector3(normal(random), normal(random), normal(random)).normalized());
  for (const Vector3& axis : axes) {
    const Matrix3 rotation = xml::rotation_from_z_to(axis);
    CHECK((rotation.col(2) - axis).norm() < rounding);
    CHECK(difference(rotation * rotation.transpose(), Matrix3::Identity()) < 4 * rounding);
    CHECK(rotation.determinant() == doctest::Approx(1).epsilon(1e-14));
  }
  CHECK(xml::rotation_from_z_to(Vector3::UnitZ()) == Matrix3::Identity());
}

TEST_CASE("faults of a placement stand at its attributes") {
  struct Case {
    const char* attributes;
    const char* faults;
  };
  const std::vector<Case> cases{
      {"position='1 2'", "1:7: position of <pose>: 2 numbers; expected 3"},
      {"position='1 2 3 4'", "1:7: position of <pose>: 4 numbers; expected 3"},
      {"position=''", "1:7: position of <pose>: 0 numbers; expected 3"},
      {"position='1 2 nan'", "1:7: position of <pose>: \"nan\" is not a finite number"},
      {"\n  quaternion='1 0 0'", "2:3: quaternion of <pose>: 3 numbers; expected 4"},
      {"rotation-vector = '1 x 0'", "1:7: rotation-vector of <pose>: \"x\" is not a number"},
      {"rotation-vector='0 0 0' quaternion='1 0 0 0'",
       "1:7: rotation-vector of <pose> besides quaternion; expected one orientation at most"},
      {"roll-pitch-yaw='0 0 0' rotation-vector='0 0 0'",
       "1:30: rotation-vector of <pose> besides roll-pitch-yaw; expected one orientation at most"},
      {"position='0 0 0' rpy='0 0 0'",
       "1:24: unknown attribute \"rpy\" of <pose>; expected position, quaternion, roll-pitch-yaw or "
       "rotation-vector"},
  };
  for (const Case& broken : cases) {
    CAPTURE(broken.attributes);
    CHECK(placed(broken.attributes).faults == broken.faults);
  }
}

}  // namespace
}  // namespace pathvet
