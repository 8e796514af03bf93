// Values from outside the project: tests/reference/arms.txt names the source of each.
#include <Eigen/LU>
#include <Eigen/SVD>
#include <set>

#include <doctest/doctest.h>

#include "pathvet/kinematics/chain.hpp"
#include "pathvet/model/units.hpp"
#include "reference/reference_file.hpp"

namespace pathvet {
namespace {

using test::ReferenceBlock;
using Matrix = Eigen::MatrixXd;

struct Subject {
  Arm arm;
  Chain chain;
  JointVector q;
  double length_tolerance;
  double pure_tolerance;
};

Subject subject_of(const ReferenceBlock& block) {
  const Arm arm = test::reference_arm(block);
  const auto tolerance = block.numbers("tolerance");
  return {arm, Chain(arm), test::reference_joints(block, arm), tolerance.at(0), tolerance.at(1)};
}

/// The rows of the Jacobian that a block speaks of.
Matrix rows_of(const ReferenceBlock& block, const Jacobian& jacobian) {
  const std::string& rows = block.text("rows");
  if (rows == "linear") return jacobian.topRows<3>();
  if (rows == "angular") return jacobian.bottomRows<3>();
  if (rows == "planar") return jacobian.topRows<2>();
  REQUIRE(rows == "all");
  return jacobian;
}

Eigen::VectorXd singular_values(const Matrix& matrix) {
  return Eigen::JacobiSVD<Matrix>(matrix).singularValues();
}

TEST_CASE("every key of the reference file is one that a test reads") {
  const std::set<std::string> known = {
      "name",       "source", "tolerance", "base-roll-pitch-yaw", "dh",   "dh-proximal",     "dh-prismatic",
      "mount",      "flange", "joints",    "joints-rad",          "rows", "position",        "quaternion",
      "rotation",   "angle",  "jacobian",  "determinant",         "rank", "singular-values", "length",
      "null-vector"};
  const auto blocks = test::read_reference_file("arms.txt");
  CHECK(blocks.size() == 26);
  for (const ReferenceBlock& block : blocks) {
    for (const auto& line : block.lines) {
      CAPTURE(block.title());
      CAPTURE(line.first);
      CHECK(known.count(line.first) == 1);
    }
  }
}

TEST_CASE("published poses") {
  int compared = 0;
  for (const ReferenceBlock& block : test::read_reference_file("arms.txt")) {
    const Subject subject = subject_of(block);
    const Pose tcp = subject.chain.forward(subject.q);
    CAPTURE(block.title());
    if (block.has("position")) {
      const auto p = block.numbers("position");
      CHECK((tcp.position - Vector3(p.at(0), p.at(1), p.at(2))).norm() < 2 * subject.length_tolerance);
      ++compared;
    }
    if (block.has("quaternion")) {
      const auto q = block.numbers("quaternion");
      const Eigen::Quaterniond expected(q.at(0), q.at(1), q.at(2), q.at(3));
      CHECK((tcp.rotation - expected.normalized().toRotationMatrix()).cwiseAbs().maxCoeff() <
            4 * subject.pure_tolerance);
      ++compared;
    }
    if (block.has("rotation")) {
      const auto r = block.numbers("rotation");
      REQUIRE(r.size() == 9);
      const Matrix3 expected = Eigen::Map<const Eigen::Matrix<double, 3, 3, Eigen::RowMajor>>(r.data());
      CHECK((tcp.rotation - expected).cwiseAbs().maxCoeff() < subject.pure_tolerance);
      ++compared;
    }
    if (block.has("angle")) {
      const double angle = block.numbers("angle").at(0) * radians_per_degree;
      const Matrix3 expected = Eigen::AngleAxisd(angle, Vector3::UnitZ()).toRotationMatrix();
      CHECK((tcp.rotation - expected).cwiseAbs().maxCoeff() < subject.pure_tolerance);
      ++compared;
    }
  }
  CHECK(compared == 26);
}

TEST_CASE("published Jacobians, determinants and singular values") {
  int compared = 0;
  for (const ReferenceBlock& block : test::read_reference_file("arms.txt")) {
    if (!block.has("rows")) continue;
    const Subject subject = subject_of(block);
    const Matrix jacobian = rows_of(block, subject.chain.jacobian(subject.q));
    CAPTURE(block.title());
    const auto rows = block.rows("jacobian");
    for (std::size_t row = 0; row < rows.size(); ++row) {
      REQUIRE(rows[row].size() == static_cast<std::size_t>(jacobian.cols()));
      for (std::size_t column = 0; column < rows[row].size(); ++column) {
        CHECK(std::abs(jacobian(static_cast<Eigen::Index>(row), static_cast<Eigen::Index>(column)) -
                       rows[row][column]) < subject.length_tolerance);
        ++compared;
      }
    }
    if (block.has("determinant")) {
      const double expected = block.numbers("determinant").at(0);
      CHECK(jacobian.determinant() == doctest::Approx(expected).epsilon(1e-8).scale(0));
      ++compared;
    }
    if (block.has("singular-values")) {
      const auto expected = block.numbers("singular-values");
      const Eigen::VectorXd values = singular_values(jacobian);
      REQUIRE(expected.size() == static_cast<std::size_t>(values.size()));
      for (std::size_t i = 0; i < expected.size(); ++i) {
        CHECK(std::abs(values[static_cast<Eigen::Index>(i)] - expected[i]) < subject.length_tolerance);
        ++compared;
      }
    }
  }
  CHECK(compared == 9 + 36 + 6 + 2 + 3 + 3 + 6 + 6);
}

TEST_CASE("rank and lost motion at singular configurations") {
  int compared = 0;
  for (const ReferenceBlock& block : test::read_reference_file("arms.txt")) {
    if (!block.has("rank")) continue;
    const Subject subject = subject_of(block);
    Matrix jacobian = subject.chain.jacobian(subject.q);
    jacobian.topRows(3) /= block.numbers("length").at(0);
    const Eigen::VectorXd values = singular_values(jacobian);
    const auto rank = static_cast<Eigen::Index>(block.numbers("rank").at(0));
    CAPTURE(block.title());
    CAPTURE(values.transpose());
    CHECK(values[rank - 1] > 0.01);
    CHECK(values[rank] < subject.pure_tolerance);
    if (block.has("null-vector")) {
      const auto expected = block.numbers("null-vector");
      const Eigen::VectorXd null = Eigen::Map<const Eigen::VectorXd>(expected.data(), 6).normalized();
      CHECK((jacobian * null).norm() < subject.pure_tolerance);
    }
    ++compared;
  }
  CHECK(compared == 6);
}

}  // namespace
}  // namespace pathvet
