#include "kinematics/elimination.hpp"

#include <doctest/doctest.h>

#include "kinematics/circle_equations.hpp"
#include "kinematics/configuration_checks.hpp"
#include "kinematics/pose_solver.hpp"

using namespace pathvet;
using namespace pathvet::test;
using namespace pathvet::detail;

namespace {

constexpr unsigned seed = 1993;

Arm offset_wrist() {
  return distal(
      {{0, 400, 100, 90}, {0, 0, 500, 0}, {0, 0, 80, 90}, {0, 450, 0, -90}, {0, 0, 60, 90}, {0, 100, 0, 0}});
}

/// Largest angle by which the nearest candidate differs from q.
double nearest(const std::vector<SixAngles>& candidates, const JointVector& q) {
  double best = 10;
  for (const SixAngles& candidate : candidates) {
    double most = 0;
    for (int i = 0; i < 6; ++i) {
      most = std::max(most, std::abs(wrap_angle(candidate.q[static_cast<std::size_t>(i)] - q[i])));
    }
    best = std::min(best, most);
  }
  return best;
}

}  // namespace

TEST_CASE("elimination alone finds what closed forms find, before any polishing") {
  std::mt19937 random(seed);
  std::uniform_real_distribution<double> angle(-pi, pi);
  for (const Arm& arm : {three_parallel_arm(), sixteen_solutions_arm(), offset_wrist()}) {
    const ScrewAxes axes{Chain(arm)};
    const Elimination elimination(axes);
    for (int k = 0; k < 100; ++k) {
      JointVector q(6);
      for (double& value : q) value = angle(random);
      std::vector<SixAngles> candidates;
      CHECK(elimination.solve(Chain(arm).forward(q) * axes.home.inverse(), candidates));
      CHECK(nearest(candidates, q) < 1e-5);
    }
  }
}

TEST_CASE("elimination keeps the double solution at a fold") {
  // The elbow at full stretch: two solutions in one, whose roots rounding may make complex.
  std::mt19937 random(seed);
  std::uniform_real_distribution<double> angle(-pi, pi);
  const Arm arm = three_parallel_arm();
  const ScrewAxes axes{Chain(arm)};
  const Elimination elimination(axes);
  for (int k = 0; k < 100; ++k) {
    JointVector q(6);
    for (double& value : q) value = angle(random);
    q[2] = 0;
    std::vector<SixAngles> candidates;
    (void)elimination.solve(Chain(arm).forward(q) * axes.home.inverse(), candidates);
    CHECK(nearest(candidates, q) < 1e-3);
  }
}

TEST_CASE("round poses, where solutions share the value of every joint, are solved all the same") {
  const Arm arm = offset_wrist();
  const ConfigurationFinder finder(arm);
  for (const double off : {0.0, 1e-12, 1e-9, 1e-6}) {
    const JointVector q = degrees({90, 90, 90, 90, 90, 90}) + JointVector::Constant(6, off);
    const Configurations found = finder.find(Chain(arm).forward(q));
    CHECK(found.complete);
    CHECK(contains(arm, found, q, 1e-6));
  }
}

TEST_CASE("a singular configuration is given, but completeness is not claimed") {
  const Arm arm = offset_wrist();
  const JointVector q = degrees({0, 0, 0, 0, 0, 0});  // axes 1, 4 and 6 in one plane and parallel: rank 5
  const Configurations found = ConfigurationFinder(arm).find(Chain(arm).forward(q));
  CHECK_FALSE(found.complete);
  CHECK(contains(arm, found, q, 1e-4));
}

TEST_CASE("the pose solver tells a half turn from none") {
  const Arm arm = spherical_wrist_arm();
  const Chain chain(arm);
  const JointVector q = degrees({30, 40, 50, -20, 35, 60});
  const Pose pose = chain.forward(q);
  const Pose turned_round{pose.rotation * turn(Vector3::UnitY(), 180).rotation, pose.position};
  CHECK(PoseSolver(chain, Orientation::full).miss(turned_round, q).rotation == doctest::Approx(pi));
  CHECK(PoseSolver(chain, Orientation::axis).miss(turned_round, q).rotation == doctest::Approx(pi));
  CHECK(PoseSolver(chain, Orientation::free).miss(turned_round, q).rotation == 0);
}
