#include "commands/pose_figures.hpp"

#include <doctest/doctest.h>

#include "pathvet/model/units.hpp"

using namespace pathvet;
using namespace pathvet::commands;

namespace {

/// A planar arm of two links, 500 and 300 mm, in the world's x-y plane.
Arm planar() {
  Arm arm;
  arm.joints.resize(2);
  const double lengths[] = {500, 300};
  for (int i = 0; i < 2; ++i) {
    Joint& joint = arm.joints[static_cast<std::size_t>(i)];
    joint.name = i == 0 ? "J1" : "J2";
    joint.lower = -2 * pi;
    joint.upper = pi;
    joint.speed = 1;
    joint.after.position = {lengths[i], 0, 0};
  }
  arm.characteristic_length = 400;
  return arm;
}

JointVector two(double a, double b) {
  return (JointVector(2) << a, b).finished();
}

}  // namespace

TEST_CASE("figures of a planar arm against closed forms") {
  const Arm arm = planar();
  Pose frame;
  frame.position = {100, 0, 0};
  const PoseFigures figures(arm, {}, frame, Orientation::free);
  const ConfigurationReport report = figures.of(two(0, pi / 2));
  CHECK((report.pose.position - Vector3(400, 300, 0)).norm() < 1e-9);
  REQUIRE(report.singular_values.size() == 2);
  // Position rows alone: sqrt(det(J J^T)) = l1 l2 |sin q2| / L^2.
  CHECK(report.manipulability() == doctest::Approx(500.0 * 300 / (400 * 400)));
  CHECK(report.singular_values[0] >= report.min_singular_value());
  CHECK(report.inside_limits);
  CHECK(report.margins[0].value() == doctest::Approx(pi));
  CHECK(report.margins[1].value() == doctest::Approx(pi / 2));
  CHECK(figures.of(two(0, 0)).min_singular_value() == doctest::Approx(0));
  CHECK(!figures.of(two(0, 1.1 * pi)).inside_limits);
}

TEST_CASE("of whole-turn variants the one nearest to the middle of the limits, or all") {
  const Arm arm = planar();
  // The middle of the limits is -pi/2: 0.75 pi is 1.25 pi away from it, 0.75 pi - 2 pi only 0.75 pi.
  const auto one = variants_inside(arm, two(0.75 * pi, 0), false);
  REQUIRE(one.size() == 1);
  CHECK((one[0] - two(-1.25 * pi, 0)).norm() < 1e-12);
  CHECK(variants_inside(arm, two(0.75 * pi, 0), true).size() == 4);
  Arm narrow = arm;
  narrow.joints[1].lower = 0.1;
  narrow.joints[1].upper = 0.2;
  CHECK(variants_inside(narrow, two(0, 0), true).empty());
}
