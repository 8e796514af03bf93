// The determinants of known arms factor into a few sines; each formula is held against the Jacobian at random
// configurations. Siciliano et al., Robotics: Modelling, Planning and Control, chapter 3; Craig, Introduction
// to Robotics, section 3.7 (parameters); the factorisations without a source are derived.
#include <Eigen/LU>
#include <cmath>
#include <functional>

#include <doctest/doctest.h>

#include "pathvet/kinematics/chain.hpp"
#include "support/random_arm.hpp"

namespace pathvet {
namespace {

using test::Link;
using test::LinkArm;
using Formula = std::function<double(const JointVector&)>;

LinkArm arm_of(Link::Form form, const std::vector<std::array<double, 4>>& theta_d_a_alpha) {
  LinkArm arm;
  for (const auto& [theta, d, a, alpha] : theta_d_a_alpha) {
    Link link;
    link.form = form;
    link.theta = theta;
    link.d = d;
    link.a = a;
    link.alpha = alpha * radians_per_degree;
    arm.links.push_back(link);
  }
  return arm;
}

void check_formula(const char* name, const LinkArm& links, double size, const Formula& formula) {
  test::Random random(name);
  const Chain chain(test::to_arm(links));
  const int n = chain.joint_count();
  for (int trial = 0; trial < 200; ++trial) {
    const JointVector q = test::random_joints(random, links);
    const Eigen::MatrixXd jacobian = chain.jacobian(q);
    const double determinant = n == 3 ? jacobian.topRows(3).determinant() : jacobian.determinant();
    CAPTURE(q.transpose());
    CHECK(std::abs(determinant - formula(q)) < 1e-11 * size);
  }
}

TEST_CASE("anthropomorphic arm: -a2 a3 s3 (a2 c2 + a3 c23)") {
  const double a2 = 500, a3 = 400;
  check_formula("anthropomorphic", arm_of(Link::Form::distal, {{0, 0, 0, 90}, {0, 0, a2, 0}, {0, 0, a3, 0}}),
                a2 * a3 * (a2 + a3), [&](const JointVector& q) {
                  return -a2 * a3 * std::sin(q[2]) * (a2 * std::cos(q[1]) + a3 * std::cos(q[1] + q[2]));
                });
}

TEST_CASE("the same with a spherical wrist: -a2 d4 c3 (a2 c2 + d4 s23) s5") {
  const double a2 = 500, d4 = 400;
  const LinkArm arm =
      arm_of(Link::Form::distal,
             {{0, 0, 0, 90}, {0, 0, a2, 0}, {0, 0, 0, 90}, {0, d4, 0, -90}, {0, 0, 0, 90}, {0, 100, 0, 0}});
  check_formula("spherical wrist", arm, a2 * d4 * (a2 + d4), [&](const JointVector& q) {
    return -a2 * d4 * std::cos(q[2]) * (a2 * std::cos(q[1]) + d4 * std::sin(q[1] + q[2])) * std::sin(q[4]);
  });
}

TEST_CASE("Craig's six-joint arm in proximal parameters: -a2 (d4 c3 + a3 s3)(a2 c2 + a3 c23 - d4 s23) s5") {
  const double a2 = 430, a3 = 30, d3 = 150, d4 = 410;
  const LinkArm arm =
      arm_of(Link::Form::proximal,
             {{0, 0, 0, 0}, {0, 0, 0, -90}, {0, d3, a2, 0}, {0, d4, a3, -90}, {0, 0, 0, 90}, {0, 0, 0, -90}});
  check_formula("proximal", arm, a2 * (a3 + d4) * (a2 + a3 + d4), [&](const JointVector& q) {
    const double q23 = q[1] + q[2];
    return -a2 * (d4 * std::cos(q[2]) + a3 * std::sin(q[2])) *
           (a2 * std::cos(q[1]) + a3 * std::cos(q23) - d4 * std::sin(q23)) * std::sin(q[4]);
  });
}

TEST_CASE("the same kind of arm in distal parameters: a2 (d4 c3 + a3 s3)(a2 c2 + a3 c23 - d4 s23) s5") {
  const double a2 = 430, a3 = 20, d3 = 150, d4 = 410;
  const LinkArm arm =
      arm_of(Link::Form::distal,
             {{0, 0, 0, 90}, {0, 0, a2, 0}, {0, d3, a3, -90}, {0, d4, 0, 90}, {0, 0, 0, -90}, {0, 0, 0, 0}});
  check_formula("distal", arm, a2 * (a3 + d4) * (a2 + a3 + d4), [&](const JointVector& q) {
    const double q23 = q[1] + q[2];
    return a2 * (d4 * std::cos(q[2]) + a3 * std::sin(q[2])) *
           (a2 * std::cos(q[1]) + a3 * std::cos(q23) - d4 * std::sin(q23)) * std::sin(q[4]);
  });
}

TEST_CASE("three parallel axes: a2 a3 s3 s5 (a2 c2 + a3 c23 + d5 s234), though no three axes meet") {
  const double a2 = -425, a3 = -392, d5 = 95;
  const LinkArm arm =
      arm_of(Link::Form::distal,
             {{0, 89, 0, 90}, {0, 0, a2, 0}, {0, 0, a3, 0}, {0, 109, 0, 90}, {0, d5, 0, -90}, {0, 82, 0, 0}});
  check_formula("three parallel axes", arm, 425 * 392 * (425 + 392 + d5), [&](const JointVector& q) {
    const double q23 = q[1] + q[2];
    return a2 * a3 * std::sin(q[2]) * std::sin(q[4]) *
           (a2 * std::cos(q[1]) + a3 * std::cos(q23) + d5 * std::sin(q23 + q[3]));
  });
}

TEST_CASE("spherical arm with a slide: -d3^2 s2") {
  LinkArm arm = arm_of(Link::Form::distal, {{0, 0, 0, -90}, {0, 150, 0, 90}, {0, 0, 0, 0}});
  arm.links[2].type = JointType::prismatic;
  check_formula("spherical arm", arm, 500 * 500,
                [](const JointVector& q) { return -q[2] * q[2] * std::sin(q[1]); });
}

}  // namespace
}  // namespace pathvet
