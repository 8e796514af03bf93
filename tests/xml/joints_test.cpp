#include "xml/joints.hpp"

#include <doctest/doctest.h>

#include <cmath>

#include "broken_inputs.hpp"
#include "pathvet/model/units.hpp"
#include "pathvet/xml/read.hpp"

namespace pathvet {
namespace {

using Matrix4 = Eigen::Matrix4d;

constexpr double rounding_mm = 1e-12;

// The products of the contract, written out with plain 4x4 matrices and Eigen's rotations.
Matrix4 rotation(double degrees, const Vector3& axis) {
  Matrix4 m = Matrix4::Identity();
  m.topLeftCorner<3, 3>() = Eigen::AngleAxisd(degrees * radians_per_degree, axis).toRotationMatrix();
  return m;
}
Matrix4 rx(double degrees) {
  return rotation(degrees, Vector3::UnitX());
}
Matrix4 ry(double degrees) {
  return rotation(degrees, Vector3::UnitY());
}
Matrix4 rz(double degrees) {
  return rotation(degrees, Vector3::UnitZ());
}
Matrix4 translation(double x, double y, double z) {
  Matrix4 m = Matrix4::Identity();
  m.topRightCorner<3, 1>() = Vector3(x, y, z);
  return m;
}

Matrix4 matrix(const Pose& pose) {
  Matrix4 m = Matrix4::Identity();
  m.topLeftCorner<3, 3>() = pose.rotation;
  m.topRightCorner<3, 1>() = pose.position;
  return m;
}

/// A joint as the model holds it: before, motion by `value` (deg or mm) about or along z, after.
Matrix4 product(const Joint& joint, double value) {
  const Matrix4 motion = joint.type == JointType::revolute ? rz(value) : translation(0, 0, value);
  return matrix(joint.before) * motion * matrix(joint.after);
}

Joint joint_of(const std::string& type, const std::string& link) {
  const std::string text =
      "<cell version='1' name='c'><arm name='a' characteristic-length='1'><joint name='J' type='" + type +
      "' lower='-170' upper='100' speed='90' acceleration='450'>" + link + "</joint></arm></cell>";
  const Reading<Cell> reading = parse_cell(text, "x");
  REQUIRE_MESSAGE(reading.value, test::listed(reading.faults));
  return reading.value->arm.joints.at(0);
}

void check_equal(const Matrix4& one, const Matrix4& other) {
  CHECK((one - other).cwiseAbs().maxCoeff() < rounding_mm);
}

TEST_CASE("limits and rates are rad or mm") {
  const std::string link = "<mount axis='0 0 1'/>";
  const Joint revolute = joint_of("revolute", link);
  CHECK(revolute.lower == doctest::Approx(-170 * pi / 180));
  CHECK(revolute.upper == doctest::Approx(100 * pi / 180));
  CHECK(revolute.speed == doctest::Approx(pi / 2));
  CHECK(revolute.acceleration.value() == doctest::Approx(2.5 * pi));
  CHECK_FALSE(revolute.continuous);
  const Joint prismatic = joint_of("prismatic", link);
  CHECK(prismatic.type == JointType::prismatic);
  CHECK(prismatic.lower == -170);
  CHECK(prismatic.upper == 100);
  CHECK(prismatic.speed == 90);
  CHECK(prismatic.acceleration.value() == 450);
}

TEST_CASE("distal rows: Rz(theta) Tz(d) Tx(a) Rx(alpha)") {
  const std::string link = "<dh theta='11' d='450' a='150' alpha='-37'/>";
  for (const double q : {-170.0, 0.0, 33.0}) {
    check_equal(product(joint_of("revolute", link), q),
                rz(11 + q) * translation(0, 0, 450) * translation(150, 0, 0) * rx(-37));
    check_equal(product(joint_of("prismatic", link), q),
                rz(11) * translation(0, 0, 450 + q) * translation(150, 0, 0) * rx(-37));
  }
}

TEST_CASE("proximal rows: Rx(alpha) Tx(a) Rz(theta) Tz(d)") {
  const std::string link = "<dh-proximal alpha='-37' a='150' theta='11' d='450'/>";
  for (const double q : {-170.0, 0.0, 33.0}) {
    check_equal(product(joint_of("revolute", link), q),
                rx(-37) * translation(150, 0, 0) * rz(11 + q) * translation(0, 0, 450));
    check_equal(product(joint_of("prismatic", link), q),
                rx(-37) * translation(150, 0, 0) * rz(11) * translation(0, 0, 450 + q));
  }
}

TEST_CASE("mounts: a placement, then the motion about or along the axis") {
  const std::string placement = "<mount position='10 20 30' roll-pitch-yaw='10 20 30' axis='";
  const Matrix4 placed = translation(10, 20, 30) * rz(30) * ry(20) * rx(10);
  struct Case {
    const char* text;
    Vector3 axis;
  };
  for (const Case& mount : {Case{"0 0 1", {0, 0, 1}}, Case{"0 0 -1", {0, 0, -1}}, Case{"0 2 0", {0, 1, 0}},
                            Case{"-3 0 0", {-1, 0, 0}}, Case{"0.6 0 -0.8", {0.6, 0, -0.8}},
                            Case{"1 2 2", {1.0 / 3, 2.0 / 3, 2.0 / 3}}}) {
    CAPTURE(mount.text);
    const std::string link = placement + mount.text + "'/>";
    for (const double q : {-170.0, 0.0, 33.0}) {
      check_equal(product(joint_of("revolute", link), q), placed * rotation(q, mount.axis));
      const Vector3 way = q * mount.axis;
      check_equal(product(joint_of("prismatic", link), q), placed * translation(way.x(), way.y(), way.z()));
    }
  }
}

TEST_CASE("a link's part of the characteristic length") {
  CHECK(joint_of("revolute", "<dh theta='0' d='40' a='30' alpha='9'/>").link_length == doctest::Approx(50));
  CHECK(joint_of("revolute", "<dh-proximal theta='0' d='-40' a='30' alpha='9'/>").link_length ==
        doctest::Approx(50));
  // -170 to 100 along d: the greatest |d| is at the lower limit, or at the upper one
  CHECK(joint_of("prismatic", "<dh theta='0' d='0' a='30' alpha='9'/>").link_length ==
        doctest::Approx(std::hypot(30, 170)));
  CHECK(joint_of("prismatic", "<dh theta='0' d='50' a='30' alpha='9'/>").link_length ==
        doctest::Approx(std::hypot(30, 150)));
  CHECK(joint_of("prismatic", "<dh-proximal theta='0' d='-50' a='30' alpha='9'/>").link_length ==
        doctest::Approx(std::hypot(30, 220)));
  CHECK(joint_of("revolute", "<mount position='2 3 6' axis='1 0 0'/>").link_length == doctest::Approx(7));
  // the axis is in the mount's own frame: x there is y outside
  CHECK(joint_of("prismatic", "<mount position='0 100 30' roll-pitch-yaw='0 0 90' axis='5 0 0'/>")
            .link_length == doctest::Approx(std::hypot(200, 30)));
}

TEST_CASE("joint lists are turned into the model's units joint by joint") {
  const std::vector<Joint> joints{joint_of("revolute", "<mount axis='0 0 1'/>"),
                                  joint_of("prismatic", "<mount axis='0 0 1'/>")};
  const JointVector values = xml::joint_vector({90, 90}, joints);
  CHECK(values[0] == doctest::Approx(pi / 2));
  CHECK(values[1] == 90);
}

}  // namespace
}  // namespace pathvet
