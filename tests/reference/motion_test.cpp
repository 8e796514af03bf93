// Values from outside the project: tests/reference/motion.txt names the source of each.
#include <cmath>

#include <doctest/doctest.h>

#include "pathvet/model/units.hpp"
#include "pathvet/motion/curve.hpp"
#include "reference/reference_file.hpp"

namespace pathvet {
namespace {

using test::ReferenceBlock;

std::vector<ReferenceBlock> blocks_with(const std::string& key) {
  std::vector<ReferenceBlock> blocks;
  for (const ReferenceBlock& block : test::read_reference_file("motion.txt")) {
    if (block.has(key)) blocks.push_back(block);
  }
  return blocks;
}

Matrix3 rotation_of(const std::vector<double>& degrees) {
  return rotation_from_roll_pitch_yaw(degrees.at(0) * radians_per_degree, degrees.at(1) * radians_per_degree,
                                      degrees.at(2) * radians_per_degree);
}

CurvePoint at(const Leg& leg, double parameter) {
  CurvePoint point;
  leg.at(parameter, point);
  return point;
}

CurvePoint at(const Corner& corner, double time) {
  CurvePoint point;
  corner.at(time, point);
  return point;
}

/// A corner in the plane, `size` along both legs, that turns by `angle` at even speed `speed`.
Corner plane_corner(double size, double angle, double speed) {
  const Vector3 ahead(std::cos(angle), std::sin(angle), 0);
  const Pose a{Matrix3::Identity(), Vector3(-size, 0, 0)};
  const Pose b{Matrix3::Identity(), size * ahead};
  const double rate = speed / (2 * size);
  return {a, Vector3::UnitX(), Matrix3::Identity(), b, ahead, size, rate, rate};
}

TEST_CASE("slerp goes the short way, evenly, about one axis") {
  const auto blocks = blocks_with("slerp");
  REQUIRE(blocks.size() == 1);
  for (const ReferenceBlock& block : blocks) {
    CAPTURE(block.title());
    const Matrix3 from = rotation_of(block.numbers("from"));
    const Matrix3 to = rotation_of(block.numbers("to"));
    const Vector3 turn = rotation_vector(to * from.transpose());
    const auto expected = block.numbers("turn");
    CHECK(std::abs(turn.norm() * degrees_per_radian - expected.at(0)) < 1e-6);
    CHECK((turn.normalized() - Vector3(expected.at(1), expected.at(2), expected.at(3))).norm() < 2e-9);
    const Leg leg = Leg::line(Pose{from, Vector3::Zero()}, Vector3::Zero(), turn);
    CHECK(leg.turn() == doctest::Approx(turn.norm()));
    for (const auto& row : block.rows("slerp")) {
      const Eigen::Quaterniond q(row.at(1), row.at(2), row.at(3), row.at(4));
      CAPTURE(row.at(0));
      CHECK((at(leg, row.at(0)).pose.rotation - q.normalized().toRotationMatrix()).cwiseAbs().maxCoeff() <
            5e-9);
    }
  }
}

TEST_CASE("arcs through three points") {
  const auto blocks = blocks_with("arc");
  REQUIRE(blocks.size() == 3);
  for (const ReferenceBlock& block : blocks) {
    CAPTURE(block.title());
    const double tolerance = block.numbers("tolerance").at(0);
    const auto p = block.numbers("arc");
    REQUIRE(p.size() == 9);
    const Vector3 start(p[0], p[1], p[2]), via(p[3], p[4], p[5]), end(p[6], p[7], p[8]);
    const auto c = block.numbers("centre");
    const Vector3 centre(c.at(0), c.at(1), c.at(2));
    REQUIRE(Leg::is_arc(start, via, end));
    const Leg leg = Leg::arc(Pose{Matrix3::Identity(), start}, via, end, Vector3::Zero());
    CHECK(std::abs(leg.length() - block.numbers("length").at(0)) < tolerance);
    CHECK((at(leg, 0).pose.position - start).norm() < 1e-9);
    CHECK((at(leg, 1).pose.position - end).norm() < 1e-9);
    const double share = block.numbers("via-at").at(0) / block.numbers("swept").at(0);
    CHECK((at(leg, share).pose.position - via).norm() < tolerance);
    for (const double parameter : {0.1, 0.37, 0.5, 0.93}) {
      CHECK(std::abs((at(leg, parameter).pose.position - centre).norm() - block.numbers("radius").at(0)) <
            tolerance);
      CHECK(std::abs(at(leg, parameter).first.head<3>().norm() - leg.length()) < 1e-9);
    }
  }
}

TEST_CASE("corners are parabolas of known length, miss and curvature") {
  const auto blocks = blocks_with("corner");
  REQUIRE(blocks.size() == 5);
  for (const ReferenceBlock& block : blocks) {
    CAPTURE(block.title());
    const auto numbers = block.numbers("corner");
    const double tolerance = block.numbers("tolerance").at(0);
    const double angle = numbers.at(1) * radians_per_degree;
    const Corner corner = plane_corner(numbers.at(0), angle, 100);
    CHECK(std::abs(corner.half_length(false) + corner.half_length(true) - block.numbers("length").at(0)) <
          tolerance);
    const CurvePoint middle = at(corner, corner.half_time());
    CHECK(std::abs(middle.pose.position.norm() - block.numbers("miss").at(0)) < tolerance);
    const Vector3 first = middle.first.head<3>(), second = middle.second.head<3>();
    const double curvature = first.cross(second).norm() / std::pow(first.norm(), 3);
    CHECK(std::abs(curvature - block.numbers("curvature").at(0)) < 1e-8);
    CHECK(first.norm() == doctest::Approx(100 * std::cos(angle / 2)).epsilon(1e-12));
    CHECK(at(corner, 0).first.head<3>().norm() == doctest::Approx(100).epsilon(1e-12));
  }
}

TEST_CASE("at equal speeds the blend is the one of constant acceleration") {
  const auto blocks = blocks_with("legs");
  REQUIRE(blocks.size() == 1);
  for (const ReferenceBlock& block : blocks) {
    CAPTURE(block.title());
    const auto legs = block.numbers("legs");
    REQUIRE(legs.size() == 7);
    const Vector3 first(legs[0], legs[1], 0), second(legs[3], legs[4], 0);
    const double speed = first.norm() / legs[2];
    REQUIRE(speed == doctest::Approx(second.norm() / legs[5]));
    const double half_time = legs[6];
    const double angle = std::acos(first.normalized().dot(second.normalized()));
    const Corner corner = plane_corner(speed * half_time, angle, speed);
    CHECK(corner.duration() == doctest::Approx(2 * half_time));
    CHECK(std::abs(at(corner, half_time).pose.position.norm() - block.numbers("miss").at(0)) < 1e-6);
    const auto a = block.numbers("acceleration");
    for (const double time : {0.0, 0.1, 0.3, 0.45, 0.6}) {
      CAPTURE(time);
      CHECK((at(corner, time).second.head<3>() - Vector3(a.at(0), a.at(1), 0)).norm() < 1e-6);
    }
  }
}

}  // namespace
}  // namespace pathvet
