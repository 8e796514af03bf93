#include <doctest/doctest.h>

#include "kinematics/reference_arms.hpp"
#include "pathvet/kinematics/configurations.hpp"

using namespace pathvet;
using namespace pathvet::test;

namespace {

Arm limited(std::initializer_list<std::pair<double, double>> limits) {
  Arm arm;
  for (const auto& [lower, upper] : limits) {
    add_joint(arm, {}, shift(100, 0, 0), 100);
    arm.joints.back().lower = lower * radians_per_degree;
    arm.joints.back().upper = upper * radians_per_degree;
  }
  set_length(arm);
  return arm;
}

}  // namespace

TEST_CASE("whole turns inside the limits, first joint slowest") {
  const Arm arm = limited({{-360, 360}, {-90, 90}, {-200, 500}});
  const auto turns = turns_inside_limits(arm, degrees({30, 45, -170}));
  const std::vector<JointVector> expected{degrees({-330, 45, -170}), degrees({-330, 45, 190}),
                                          degrees({30, 45, -170}), degrees({30, 45, 190})};
  REQUIRE(turns.size() == expected.size());
  for (std::size_t i = 0; i < turns.size(); ++i)
    CHECK((turns[i] - expected[i]).cwiseAbs().maxCoeff() < 1e-12);
}

TEST_CASE("no turn inside the limits") {
  CHECK(turns_inside_limits(limited({{-360, 360}, {-90, 90}}), degrees({30, 100})).empty());
  CHECK(turns_inside_limits(limited({{200, 300}}), degrees({-170})).empty());
  CHECK(turns_inside_limits(limited({{180, 300}}), degrees({-170})).size() == 1);
}

TEST_CASE("touching a limit is inside, to 1e-9 of its size") {
  const Arm arm = limited({{-90, 180}});
  const double upper = arm.joints[0].upper;
  const auto at = [](double value) { return JointVector::Constant(1, value); };
  CHECK(inside_limits(arm, at(upper)));
  CHECK(inside_limits(arm, at(upper * (1 + 0.9e-9))));
  CHECK_FALSE(inside_limits(arm, at(upper * (1 + 1.1e-9))));
  CHECK(inside_limits(arm, at(arm.joints[0].lower * (1 + 0.9e-9))));
  CHECK_FALSE(inside_limits(arm, at(arm.joints[0].lower * (1 + 1.1e-9))));
  // The limit a whole turn away from the value, met only by the slack.
  const auto turns = turns_inside_limits(arm, at(upper * (1 + 0.5e-9) - 2 * pi));
  CHECK(turns.size() == 1);
  CHECK(turns_inside_limits(arm, at(arm.joints[0].lower * (1 + 0.5e-9) + 2 * pi)).size() == 1);
}

TEST_CASE("a continuous joint turns into minus pi to pi") {
  Arm arm = limited({{-180, 180}});
  arm.joints[0].continuous = true;
  const auto turns = turns_inside_limits(arm, degrees({530}));
  REQUIRE(turns.size() == 1);
  CHECK(turns[0][0] == doctest::Approx(170 * radians_per_degree));
  CHECK(inside_limits(arm, degrees({5000})));
}

TEST_CASE("a prismatic joint has no turns") {
  Arm arm = limited({{-180, 180}, {-180, 180}});
  arm.joints[1].type = JointType::prismatic;
  arm.joints[1].lower = 0;
  arm.joints[1].upper = 500;
  JointVector q = degrees({20, 0});
  q[1] = 300;
  REQUIRE(turns_inside_limits(arm, q).size() == 1);
  q[1] = 501;
  CHECK(turns_inside_limits(arm, q).empty());
}

TEST_CASE("combined limits choose among the turns") {
  Arm arm = limited({{-360, 360}, {-360, 360}});
  CombinedLimit limit;
  limit.terms = {{0, 1.0}, {1, 1.0}};
  limit.lower = -60 * radians_per_degree;
  limit.upper = 240 * radians_per_degree;
  arm.combined_limits.push_back(limit);
  const JointVector q = degrees({100, 120});
  CHECK(inside_limits(arm, q));
  CHECK_FALSE(inside_limits(arm, degrees({130, 120})));
  // 100+120 = 220 holds; one turn less in either is -140: not; one turn less here and more there isn't within
  // +-360.
  CHECK(turns_inside_limits(arm, q).size() == 1);
  arm.combined_limits[0].lower.reset();
  arm.combined_limits[0].upper.reset();
  CHECK(turns_inside_limits(arm, q).size() == 4);
}
