#include "pathvet/motion/curve.hpp"

#include <cmath>
#include <functional>
#include <kdl/path_circle.hpp>
#include <kdl/path_line.hpp>
#include <kdl/rotational_interpolation_sa.hpp>

#include <doctest/doctest.h>

#include "pathvet/model/units.hpp"
#include "support/kdl_chain.hpp"
#include "support/random_arm.hpp"

namespace pathvet {
namespace {

using test::Random;
using Curve = std::function<CurvePoint(double)>;

Curve curve_of(const Leg& leg) {
  return [leg](double parameter) {
    CurvePoint point;
    leg.at(parameter, point);
    return point;
  };
}

Curve curve_of(const Corner& corner) {
  return [corner](double time) {
    CurvePoint point;
    corner.at(time, point);
    return point;
  };
}

/// Velocity over angular velocity by Richardson's extrapolation of central differences of the pose.
Vector6 difference_of_poses(const Curve& curve, double place, double step) {
  const auto central = [&](double h) {
    const Pose ahead = curve(place + h).pose, behind = curve(place - h).pose;
    Vector6 rate;
    rate << (ahead.position - behind.position) / (2 * h),
        rotation_vector(ahead.rotation * behind.rotation.transpose()) / (2 * h);
    return rate;
  };
  return (4 * central(step / 2) - central(step)) / 3;
}

Vector6 difference_of_rates(const Curve& curve, double place, double step) {
  const auto central = [&](double h) -> Vector6 {
    return (curve(place + h).first - curve(place - h).first) / (2 * h);
  };
  return (4 * central(step / 2) - central(step)) / 3;
}

void check_derivatives(const Curve& curve, double place, double step) {
  const CurvePoint point = curve(place);
  CHECK((difference_of_poses(curve, place, step) - point.first).norm() < 1e-6 * (1 + point.first.norm()));
  CHECK((difference_of_rates(curve, place, step) - point.second).norm() < 1e-6 * (1 + point.second.norm()));
  CHECK((point.pose.rotation * point.pose.rotation.transpose() - Matrix3::Identity()).norm() < 1e-13);
}

Vector3 random_turn(Random& random) {
  return random.uniform(0, 3) * test::random_direction(random);
}

TEST_CASE("derivatives of lines and arcs agree with differences") {
  Random random("derivatives of legs");
  for (int trial = 0; trial < 300; ++trial) {
    const Pose start = test::random_pose(random, 500);
    const Vector3 end = test::random_pose(random, 500).position,
                  via = test::random_pose(random, 500).position;
    const Vector3 turn = trial % 5 == 0 ? Vector3(Vector3::Zero()) : random_turn(random);
    CAPTURE(trial);
    check_derivatives(curve_of(Leg::line(start, end, turn)), random.uniform(0.05, 0.95), 1e-3);
    if (!Leg::is_arc(start.position, via, end)) continue;
    check_derivatives(curve_of(Leg::arc(start, via, end, turn)), random.uniform(0.05, 0.95), 1e-3);
  }
}

TEST_CASE("derivatives of corners agree with differences, turning or not") {
  Random random("derivatives of corners");
  for (int trial = 0; trial < 300; ++trial) {
    const double size = random.uniform(1, 50);
    const Vector3 in = test::random_direction(random), out = test::random_direction(random);
    const Matrix3 corner = test::random_pose(random, 1).rotation;
    // Small turns too: log and exp have their seams there.
    const double most = trial % 3 == 0 ? 1e-7 : 1.5;
    const Pose a{rotation_from_vector(random.uniform(0, most) * test::random_direction(random)) * corner,
                 -size * in};
    const Pose b{rotation_from_vector(random.uniform(0, most) * test::random_direction(random)) * corner,
                 size * out};
    const Corner blend(a, in, corner, b, out, size, random.uniform(0.5, 5), random.uniform(0.5, 5));
    CAPTURE(trial);
    check_derivatives(curve_of(blend), random.uniform(0.1, 0.9) * blend.duration(), 1e-3 * blend.duration());
  }
}

TEST_CASE("a corner begins and ends on its neighbours, with their tangents and rates") {
  Random random("ends of corners");
  for (int trial = 0; trial < 300; ++trial) {
    const double size = random.uniform(1, 50);
    const Vector3 in = test::random_direction(random), out = test::random_direction(random);
    const double rate_in = random.uniform(0.5, 5), rate_out = random.uniform(0.5, 5);
    const Matrix3 corner = test::random_pose(random, 1).rotation;
    const Pose a{rotation_from_vector(random.uniform(0, 1) * test::random_direction(random)) * corner,
                 -size * in};
    const Pose b{rotation_from_vector(random.uniform(0, 1) * test::random_direction(random)) * corner,
                 size * out};
    const Corner blend(a, in, corner, b, out, size, rate_in, rate_out);
    const CurvePoint begin = curve_of(blend)(0), end = curve_of(blend)(blend.duration());
    CAPTURE(trial);
    CHECK((begin.pose.position - a.position).norm() < 1e-12 * size);
    CHECK((end.pose.position - b.position).norm() < 1e-11 * size);
    CHECK((begin.pose.rotation - a.rotation).norm() < 1e-13);
    CHECK((end.pose.rotation - b.rotation).norm() < 1e-11);
    CHECK((begin.first.head<3>() - 2 * size * rate_in * in).norm() < 1e-11 * size * rate_in);
    CHECK((end.first.head<3>() - 2 * size * rate_out * out).norm() < 1e-9 * size * rate_out);
    // The curve parameter is 1/2 where the halves meet, whatever the rates.
    const Vector3 middle = curve_of(blend)(blend.half_time()).pose.position;
    CHECK((middle - size * 0.25 * (out - in)).norm() < 1e-10 * size);
  }
}

TEST_CASE("lines and arcs agree with KDL's path segments") {
  Random random("legs against KDL");
  for (int trial = 0; trial < 300; ++trial) {
    const Pose start = test::random_pose(random, 500);
    const Vector3 turn = random_turn(random);
    const Pose end{rotation_from_vector(turn) * start.rotation, test::random_pose(random, 500).position};
    const Leg line = Leg::line(start, end.position, turn);
    KDL::Path_Line expected(test::to_kdl(start), test::to_kdl(end),
                            new KDL::RotationalInterpolation_SingleAxis(), 1e-3);
    // A quarter to three quarters of a circle about a centre beside the start, given by a point in between.
    const Vector3 centre = start.position + random.uniform(10, 300) * test::random_direction(random);
    const Vector3 ray = start.position - centre;
    const Vector3 side = ray.cross(test::random_direction(random)).normalized() * ray.norm();
    const double angle = random.uniform(0.5 * pi, 0.95 * pi);
    const auto on_circle = [&](double a) -> Vector3 {
      return centre + std::cos(a) * ray + std::sin(a) * side;
    };
    const Leg arc = Leg::arc(start, on_circle(0.4 * angle), on_circle(angle), turn);
    KDL::Path_Circle circle(test::to_kdl(start), test::to_kdl(centre), test::to_kdl(on_circle(0.5 * pi)),
                            test::to_kdl(end).M, angle, new KDL::RotationalInterpolation_SingleAxis(), 1e-3);
    CAPTURE(trial);
    CHECK(arc.length() == doctest::Approx(angle * ray.norm()).epsilon(1e-9));
    for (const double share : {0.0, 0.21, 0.5, 0.83, 1.0}) {
      const Pose on_line = curve_of(line)(share).pose, on_arc = curve_of(arc)(share).pose;
      const Pose line_pose = test::from_kdl(expected.Pos(share * expected.PathLength()));
      const Pose arc_pose = test::from_kdl(circle.Pos(share * circle.PathLength()));
      CHECK((on_line.position - line_pose.position).norm() < 1e-9);
      CHECK((on_line.rotation - line_pose.rotation).norm() < 1e-9);
      CHECK((on_arc.position - arc_pose.position).norm() < 1e-8);
      CHECK((on_arc.rotation - arc_pose.rotation).norm() < 1e-9);
    }
  }
}

}  // namespace
}  // namespace pathvet
