#include "pathvet/model/pose.hpp"

#include <cmath>
#include <kdl/frames.hpp>

#include <doctest/doctest.h>

#include "pathvet/model/units.hpp"
#include "support/kdl_chain.hpp"
#include "support/random_arm.hpp"

namespace pathvet {
namespace {

using test::Random;

/// Rotation by Rodrigues' formula in long double, with 2 sin^2(t/2) for 1 - cos t: an oracle without a seam.
Matrix3 rodrigues(const Vector3& vector) {
  using Long = long double;
  const Long x = vector.x(), y = vector.y(), z = vector.z();
  const Long angle = std::sqrt(x * x + y * y + z * z);
  if (angle == 0) return Matrix3::Identity();
  const Long sine = std::sin(angle) / angle;
  const Long half = std::sin(angle / 2) / angle;
  const Long versine = 2 * half * half;
  const Long entries[9] = {
      1 - versine * (y * y + z * z), versine * x * y - sine * z,    versine * x * z + sine * y,
      versine * x * y + sine * z,    1 - versine * (x * x + z * z), versine * y * z - sine * x,
      versine * x * z - sine * y,    versine * y * z + sine * x,    1 - versine * (x * x + y * y)};
  Matrix3 rotation;
  for (int i = 0; i < 9; ++i) rotation(i / 3, i % 3) = static_cast<double>(entries[i]);
  return rotation;
}

TEST_CASE("the zero vector is the identity and back") {
  CHECK(rotation_from_vector(Vector3::Zero()) == Matrix3::Identity());
  CHECK(rotation_vector(Matrix3::Identity()) == Vector3::Zero());
}

TEST_CASE("small rotation vectors survive the way to a matrix and back, each decade") {
  Random random("small rotations");
  for (int decade = -24; decade <= -1; ++decade) {
    for (int trial = 0; trial < 50; ++trial) {
      const double angle = std::pow(10.0, decade) * random.uniform(1, 9.99);
      const Vector3 vector = angle * test::random_direction(random);
      const Matrix3 rotation = rotation_from_vector(vector);
      CAPTURE(vector.transpose());
      CHECK((rotation - rodrigues(vector)).cwiseAbs().maxCoeff() < 4e-16);
      // Off the diagonal the matrix carries the vector with full relative accuracy, however small it is.
      CHECK((rotation_vector(rotation) - vector).norm() < 4e-15 * vector.norm());
    }
  }
}

TEST_CASE("rotation vectors of every size agree with Rodrigues' formula") {
  Random random("rotations of any size");
  for (int trial = 0; trial < 20000; ++trial) {
    const Vector3 vector = random.uniform(0, 12) * test::random_direction(random);
    CHECK((rotation_from_vector(vector) - rodrigues(vector)).cwiseAbs().maxCoeff() < 4e-15);
  }
}

TEST_CASE("near a half turn the vector comes back, its sign included") {
  Random random("near pi");
  for (int decade = -12; decade <= -1; ++decade) {
    for (int trial = 0; trial < 50; ++trial) {
      const double angle = pi - std::pow(10.0, decade) * random.uniform(1, 9.99);
      const Vector3 vector = angle * test::random_direction(random);
      CAPTURE(vector.transpose());
      CHECK((rotation_vector(rotation_from_vector(vector)) - vector).norm() < 1e-14);
    }
  }
}

TEST_CASE("beyond a half turn the short way comes back") {
  Random random("beyond pi");
  for (int trial = 0; trial < 1000; ++trial) {
    const Vector3 axis = test::random_direction(random);
    const double angle = random.uniform(pi + 1e-9, 2 * pi - 1e-9);
    CHECK((rotation_vector(rotation_from_vector(angle * axis)) - (angle - 2 * pi) * axis).norm() < 2e-14);
  }
}

TEST_CASE("an exact half turn has the axis whose first non-zero component is positive") {
  const Matrix3 about_x = Vector3(1, -1, -1).asDiagonal();
  const Matrix3 about_y = Vector3(-1, 1, -1).asDiagonal();
  const Matrix3 about_z = Vector3(-1, -1, 1).asDiagonal();
  CHECK((rotation_vector(about_x) - Vector3(pi, 0, 0)).norm() < 1e-15);
  CHECK((rotation_vector(about_y) - Vector3(0, pi, 0)).norm() < 1e-15);
  CHECK((rotation_vector(about_z) - Vector3(0, 0, pi)).norm() < 1e-15);
  // 2 n n^T - 1 for n = (0.6, -0.8, 0), and the same rotation from -n: one matrix, so one vector.
  const Vector3 axis(0.6, -0.8, 0);
  const Matrix3 oblique = 2 * axis * axis.transpose() - Matrix3::Identity();
  CHECK((rotation_vector(oblique) - pi * axis).norm() < 1e-14);
}

TEST_CASE("half turns about random axes have angle pi and a right axis") {
  Random random("half turns");
  for (int trial = 0; trial < 1000; ++trial) {
    const Vector3 axis = test::random_direction(random);
    const Matrix3 rotation = 2 * axis * axis.transpose() - Matrix3::Identity();
    const Vector3 vector = rotation_vector(rotation);
    CHECK(vector.norm() == doctest::Approx(pi).epsilon(1e-14));
    CHECK(std::abs(std::abs(vector.normalized().dot(axis)) - 1) < 1e-14);
    CHECK((rotation_from_vector(vector) - rotation).cwiseAbs().maxCoeff() < 1e-14);
  }
}

TEST_CASE("a quaternion has w >= 0 and makes the matrix it was made from") {
  Random random("quaternions");
  for (int trial = 0; trial < 10000; ++trial) {
    const Matrix3 rotation = rodrigues(random.uniform(0, 2 * pi) * test::random_direction(random));
    const Eigen::Quaterniond q = quaternion(rotation);
    CHECK(q.w() >= 0);
    CHECK(std::abs(q.norm() - 1) < 1e-15);
    CHECK((q.toRotationMatrix() - rotation).cwiseAbs().maxCoeff() < 2e-15);
  }
}

TEST_CASE("roll, pitch and yaw are about fixed axes, as in KDL's Rotation::RPY") {
  Random random("roll pitch yaw");
  for (int trial = 0; trial < 10000; ++trial) {
    const double roll = random.uniform(-pi, pi), pitch = random.uniform(-pi, pi),
                 yaw = random.uniform(-pi, pi);
    const Matrix3 expected =
        test::from_kdl(KDL::Frame(KDL::Rotation::RPY(roll, pitch, yaw), KDL::Vector::Zero())).rotation;
    // Two ways of rounding, a few last places each.
    CHECK((rotation_from_roll_pitch_yaw(roll, pitch, yaw) - expected).cwiseAbs().maxCoeff() < 2e-15);
  }
}

TEST_CASE("poses multiply as frames do, and a pose times its inverse is the identity") {
  Random random("poses");
  for (int trial = 0; trial < 1000; ++trial) {
    const Pose a_b = test::random_pose(random, 2000), b_c = test::random_pose(random, 2000);
    const Vector3 point = 1000 * test::random_direction(random);
    CHECK(((a_b * b_c) * point - a_b * (b_c * point)).norm() < 1e-11);
    const Pose round = a_b * a_b.inverse();
    CHECK(round.position.norm() < 1e-11);
    CHECK((round.rotation - Matrix3::Identity()).cwiseAbs().maxCoeff() < 1e-14);
  }
}

}  // namespace
}  // namespace pathvet
