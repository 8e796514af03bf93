#include "pathvet/kinematics/chain.hpp"

#include <kdl/chainfksolverpos_recursive.hpp>
#include <kdl/chainjnttojacdotsolver.hpp>
#include <kdl/chainjnttojacsolver.hpp>

#include <doctest/doctest.h>

#include "support/kdl_chain.hpp"
#include "support/random_arm.hpp"

namespace pathvet {
namespace {

using test::LinkArm;
using test::Random;

// Outside source of every comparison here: Orocos KDL 1.5 (Debian liborocos-kdl-dev). The random arms reach
// up to 13 m, whose last place is 2e-12 mm; sixteen joints add some of them up.
constexpr double position_tolerance = 1e-9;   // mm
constexpr double rotation_tolerance = 1e-12;  // pure
constexpr int arms_a_test = 400;

JointVector random_rates(Random& random, int joints) {
  JointVector rates(joints);
  for (int i = 0; i < joints; ++i) rates[i] = random.uniform(-2, 2);
  return rates;
}

double linear_part(const Eigen::Matrix<double, 6, Eigen::Dynamic>& matrix) {
  return matrix.topRows<3>().cwiseAbs().maxCoeff();
}
double angular_part(const Eigen::Matrix<double, 6, Eigen::Dynamic>& matrix) {
  return matrix.bottomRows<3>().cwiseAbs().maxCoeff();
}

TEST_CASE("the forward map agrees with KDL on random chains of every length") {
  Random random("forward map against KDL");
  for (int trial = 0; trial < arms_a_test; ++trial) {
    const LinkArm links = test::random_link_arm(random, 1 + trial % max_joints);
    const Chain chain(test::to_arm(links), links.tool);
    const KDL::Chain kdl = test::to_kdl(links);
    REQUIRE(chain.joint_count() == static_cast<int>(kdl.getNrOfJoints()));
    KDL::ChainFkSolverPos_recursive solver(kdl);
    const JointVector q = test::random_joints(random, links);
    KDL::Frame expected;
    REQUIRE(solver.JntToCart(test::to_kdl(q), expected) == 0);
    const Pose difference{chain.forward(q).rotation - test::from_kdl(expected).rotation,
                          chain.forward(q).position - test::from_kdl(expected).position};
    CAPTURE(trial);
    CHECK(difference.position.norm() < position_tolerance);
    CHECK(difference.rotation.cwiseAbs().maxCoeff() < rotation_tolerance);
  }
}

TEST_CASE("the Jacobian agrees with KDL's on random chains of every length") {
  Random random("Jacobian against KDL");
  for (int trial = 0; trial < arms_a_test; ++trial) {
    const LinkArm links = test::random_link_arm(random, 1 + trial % max_joints);
    const Chain chain(test::to_arm(links), links.tool);
    const KDL::Chain kdl = test::to_kdl(links);
    KDL::ChainJntToJacSolver solver(kdl);
    const JointVector q = test::random_joints(random, links);
    KDL::Jacobian expected(kdl.getNrOfJoints());
    REQUIRE(solver.JntToJac(test::to_kdl(q), expected) == 0);
    const Jacobian difference = chain.jacobian(q) - expected.data;
    CAPTURE(trial);
    CHECK(linear_part(difference) < position_tolerance);
    CHECK(angular_part(difference) < rotation_tolerance);
  }
}

TEST_CASE("the scaled Jacobian is the Jacobian with lengths measured in characteristic lengths") {
  Random random("scaled Jacobian");
  for (int trial = 0; trial < arms_a_test; ++trial) {
    const LinkArm links = test::random_link_arm(random, 1 + trial % max_joints);
    const double length = random.uniform(100, 3000);
    const Chain chain(test::to_arm(links, length), links.tool);
    const JointVector q = test::random_joints(random, links);
    Jacobian expected = chain.jacobian(q);
    expected.topRows<3>() /= length;
    for (int i = 0; i < chain.joint_count(); ++i) {
      if (!chain.is_revolute(i)) expected.col(i) *= length;
    }
    CAPTURE(trial);
    CHECK((chain.scaled_jacobian(q) - expected).cwiseAbs().maxCoeff() < rotation_tolerance);
  }
}

TEST_CASE("the bias agrees with KDL's derivative of the Jacobian times the rates") {
  Random random("bias against KDL");
  for (int trial = 0; trial < arms_a_test; ++trial) {
    const LinkArm links = test::random_link_arm(random, 1 + trial % max_joints);
    const Chain chain(test::to_arm(links), links.tool);
    const KDL::Chain kdl = test::to_kdl(links);
    KDL::ChainJntToJacDotSolver solver(kdl);
    solver.setHybridRepresentation();
    const JointVector q = test::random_joints(random, links);
    const JointVector rates = random_rates(random, chain.joint_count());
    KDL::Twist twist;
    REQUIRE(solver.JntToJacDot(KDL::JntArrayVel(test::to_kdl(q), test::to_kdl(rates)), twist) == 0);
    ChainState<Eigen::Dynamic> state;
    chain.evaluate<Eigen::Dynamic>(q, state);
    const Vector6 bias = chain.bias<Eigen::Dynamic>(state, rates);
    CAPTURE(trial);
    for (int row = 0; row < 3; ++row) {
      // Squares of rates up to 2 over sixteen joints make the entries a thousand times the reach.
      CHECK(bias[row] == doctest::Approx(twist.vel[row]).epsilon(1e-10).scale(1000));
      CHECK(bias[row + 3] == doctest::Approx(twist.rot[row]).epsilon(1e-11).scale(100));
    }
  }
}

TEST_CASE("the bias agrees with Richardson differences of the Jacobian") {
  Random random("bias against differences");
  for (int trial = 0; trial < arms_a_test; ++trial) {
    const LinkArm links = test::random_link_arm(random, 1 + trial % max_joints);
    const Chain chain(test::to_arm(links), links.tool);
    const JointVector q = test::random_joints(random, links);
    const JointVector rates = random_rates(random, chain.joint_count());
    const auto central = [&](double step) -> Vector6 {
      const JointVector ahead = q + step * rates;
      const JointVector behind = q - step * rates;
      return (chain.jacobian(ahead) - chain.jacobian(behind)) * rates / (2 * step);
    };
    const double step = 2e-3;
    const Vector6 expected = (4 * central(step / 2) - central(step)) / 3;
    ChainState<Eigen::Dynamic> state;
    chain.evaluate<Eigen::Dynamic>(q, state);
    const Vector6 bias = chain.bias<Eigen::Dynamic>(state, rates);
    CAPTURE(trial);
    // Error of the extrapolated difference: the fifth derivative times step^4 / 120, at most about 32^4 of
    // the reach.
    const double size = std::max(1.0, expected.head<3>().norm());
    CHECK((bias - expected).head<3>().norm() < 1e-4 * size + 1e-3);
    CHECK((bias - expected).tail<3>().norm() < 1e-4 * std::max(1.0, expected.tail<3>().norm()));
  }
}

TEST_CASE("six joints at fixed size give what the dynamic size gives") {
  Random random("fixed size against dynamic size");
  for (int trial = 0; trial < arms_a_test; ++trial) {
    const LinkArm links = test::random_link_arm(random, 6);
    const Chain chain(test::to_arm(links), links.tool);
    const JointVector q = test::random_joints(random, links);
    const JointVector rates = random_rates(random, 6);
    ChainState<6> fixed;
    ChainState<Eigen::Dynamic> dynamic;
    chain.evaluate<6>(JointColumn<6>(q), fixed);
    chain.evaluate<Eigen::Dynamic>(q, dynamic);
    CAPTURE(trial);
    // The compiler may contract or reorder the two differently: a few last places are allowed, relative to
    // the reach.
    const double ulps = 1e-14;
    const double reach = 8000;
    CHECK((fixed.tcp.position - dynamic.tcp.position).norm() < ulps * reach);
    CHECK((fixed.tcp.rotation - dynamic.tcp.rotation).cwiseAbs().maxCoeff() < ulps);
    JacobianMatrix<6> fixed_jacobian, fixed_scaled;
    Jacobian dynamic_jacobian, dynamic_scaled;
    chain.jacobian<6>(fixed, fixed_jacobian);
    chain.jacobian<Eigen::Dynamic>(dynamic, dynamic_jacobian);
    CHECK(linear_part(fixed_jacobian - dynamic_jacobian) < ulps * reach);
    CHECK(angular_part(fixed_jacobian - dynamic_jacobian) < ulps);
    chain.scaled_jacobian<6>(fixed, fixed_scaled);
    chain.scaled_jacobian<Eigen::Dynamic>(dynamic, dynamic_scaled);
    CHECK((fixed_scaled - dynamic_scaled).cwiseAbs().maxCoeff() < ulps * reach / 1000);
    const Vector6 difference =
        chain.bias<6>(fixed, JointColumn<6>(rates)) - chain.bias<Eigen::Dynamic>(dynamic, rates);
    const double squares = 6 * 6 * 4;
    CHECK(difference.head<3>().norm() < ulps * reach * squares);
    CHECK(difference.tail<3>().norm() < ulps * squares);
  }
}

TEST_CASE("a moved base moves the TCP and turns the Jacobian with it") {
  Random random("moved base");
  for (int trial = 0; trial < arms_a_test; ++trial) {
    const LinkArm links = test::random_link_arm(random, 1 + trial % max_joints);
    const JointVector q = test::random_joints(random, links);
    const Pose move = test::random_pose(random, 2000);
    LinkArm moved_links = links;
    moved_links.base = move * links.base;
    const Chain chain(test::to_arm(links), links.tool);
    const Chain moved(test::to_arm(moved_links), links.tool);
    CAPTURE(trial);
    CHECK((moved.forward(q).position - move * chain.forward(q).position).norm() < position_tolerance);
    Jacobian turned = chain.jacobian(q);
    turned.topRows<3>() = (move.rotation * turned.topRows<3>()).eval();
    turned.bottomRows<3>() = (move.rotation * turned.bottomRows<3>()).eval();
    CHECK(linear_part(moved.jacobian(q) - turned) < position_tolerance);
  }
}

TEST_CASE("the skeleton runs from the base through the joints' origins to the TCP") {
  Random random("skeleton");
  const LinkArm links = test::random_link_arm(random, 7);
  const Chain chain(test::to_arm(links), links.tool);
  const JointVector q = test::random_joints(random, links);
  const auto points = chain.skeleton(q);
  REQUIRE(points.cols() == 9);
  CHECK((points.col(8) - chain.forward(q).position).norm() < position_tolerance);
  // A joint's origin is the TCP of the arm that ends before this joint's motion.
  LinkArm head = links;
  for (int i = 6; i >= 0; --i) {
    const test::Link link = links.links[static_cast<std::size_t>(i)];
    head.links.resize(static_cast<std::size_t>(i));
    head.flange = test::to_joint(link).before;
    head.tool = Pose{};
    const Pose origin = Chain(test::to_arm(head)).forward(q.head(i));
    CHECK((points.col(i + 1) - origin.position).norm() < position_tolerance);
  }
}

}  // namespace
}  // namespace pathvet
