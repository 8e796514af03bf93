// The main job against closed forms: tests/reference/spikes.txt says which.
#include <fmt/format.h>

#include <cmath>
#include <optional>
#include <sstream>

#include <doctest/doctest.h>

#include "pathvet/checks/check_path.hpp"
#include "pathvet/kinematics/chain.hpp"
#include "reference/reference_file.hpp"

namespace pathvet {
namespace {

using test::ReferenceBlock;

Vector3 vector_of(const ReferenceBlock& block, const std::string& key) {
  if (!block.has(key)) return Vector3::Zero();
  const auto numbers = block.numbers(key);
  return {numbers.at(0), numbers.at(1), numbers.at(2)};
}

Cell cell_of(const ReferenceBlock& block) {
  Cell cell;
  cell.arm = test::reference_arm(block);
  const auto limits = block.rows("limits");
  REQUIRE(limits.size() == cell.arm.joints.size());
  cell.arm.characteristic_length = 1000;
  for (std::size_t i = 0; i < limits.size(); ++i) {
    Joint& joint = cell.arm.joints[i];
    joint.name = fmt::format("J{}", i + 1);
    joint.lower = limits[i].at(0) * radians_per_degree;
    joint.upper = limits[i].at(1) * radians_per_degree;
    joint.speed = limits[i].at(2) * radians_per_degree;
    if (limits[i].at(3) > 0) joint.acceleration = limits[i].at(3) * radians_per_degree;
  }
  cell.tools.push_back({"tool", Pose{Matrix3::Identity(), vector_of(block, "tool")}});
  return cell;
}

/// Two waypoints: the start by its joints, and where the one linear move ends.
Path path_of(const ReferenceBlock& block, const Cell& cell) {
  Waypoint start;
  start.id = "start";
  start.tool = 0;
  const auto degrees = block.numbers("start");
  JointVector q(cell.arm.joint_count());
  REQUIRE(degrees.size() == cell.arm.joints.size());
  for (std::size_t i = 0; i < degrees.size(); ++i)
    q[static_cast<Eigen::Index>(i)] = degrees[i] * radians_per_degree;
  start.joints = q;
  start.orientation = block.has("orientation") ? Orientation::free : Orientation::full;
  start.speed = block.numbers("speed").at(0);
  start.turn_rate = (block.has("turn-rate") ? block.numbers("turn-rate").at(0) : 90) * radians_per_degree;
  Waypoint end = start;
  end.id = "end";
  end.move = Move::linear;
  end.joints.reset();
  const Pose begin = Chain(cell.arm, cell.tools.front().placement).forward(q);
  end.pose = Pose{rotation_from_vector(vector_of(block, "turn") * radians_per_degree) * begin.rotation,
                  begin.position + vector_of(block, "move")};
  Path path;
  path.waypoints = {start, end};
  return path;
}

struct Claim {
  std::string code, joint;
  std::optional<double> begin, end, peak, value;
};

Claim claim_of(const std::string& line) {
  std::istringstream words(line);
  Claim claim;
  std::string numbers[4];
  words >> claim.code >> claim.joint >> numbers[0] >> numbers[1] >> numbers[2] >> numbers[3];
  REQUIRE(words);
  std::optional<double>* const fields[4] = {&claim.begin, &claim.end, &claim.peak, &claim.value};
  for (int i = 0; i < 4; ++i) {
    if (numbers[i] != "x") *fields[i] = std::stod(numbers[i]);
  }
  return claim;
}

bool agree(const std::optional<double>& claimed, double actual, double tolerance) {
  return !claimed || std::abs(*claimed - actual) <= tolerance;
}

/// A finding's value in degrees where it is an angle or a rate of one.
double shown_value(const Finding& finding) {
  if (!finding.value) return std::nan("");
  return finding.quantity == Quantity::length ? *finding.value : *finding.value * degrees_per_radian;
}

bool holds(const Claim& claim, const PathResult& result, const Finding& finding, double tolerance) {
  const std::string joint = finding.axis < 0 ? "-" : result.axes[static_cast<std::size_t>(finding.axis)].name;
  return name(finding.code) == claim.code && joint == claim.joint &&
         agree(claim.begin, finding.begin, tolerance) && agree(claim.end, finding.end, tolerance) &&
         agree(claim.peak, finding.peak, 1e-4) &&
         agree(claim.value, shown_value(finding), tolerance * std::abs(claim.value.value_or(0)) + 1e-6);
}

std::string listing(const PathResult& result) {
  std::ostringstream text;
  text.precision(10);
  for (const Finding& finding : result.findings) {
    text << "\n  " << name(finding.code) << ' ' << finding.axis + 1 << ' ' << finding.begin << ' '
         << finding.end << ' ' << finding.peak << ' ' << shown_value(finding);
  }
  return text.str();
}

TEST_CASE("the check finds what closed forms foretell") {
  const auto blocks = test::read_reference_file("spikes.txt");
  REQUIRE(blocks.size() == 8);
  for (const ReferenceBlock& block : blocks) {
    CAPTURE(block.title());
    const Cell cell = cell_of(block);
    const Path path = path_of(block, cell);
    const auto checked = check_path(path, cell, CheckOptions{});
    for (const Fault& fault : checked.faults) FAIL_CHECK(fault.what);
    if (!checked.value) continue;
    const PathResult& result = *checked.value;
    const double tolerance = block.numbers("tolerance").at(0);
    const std::string found = listing(result);
    CAPTURE(found);
    for (const std::string& line : block.lines.at("finding")) {
      const Claim claim = claim_of(line);
      bool seen = false;
      for (const Finding& finding : result.findings) seen = seen || holds(claim, result, finding, tolerance);
      CAPTURE(line);
      CHECK(seen);
    }
    if (!block.has("highest-speed")) continue;
    const SegmentResult& segment = result.segments.front();
    const double unit = segment.turn_on_the_spot ? degrees_per_radian : 1;
    REQUIRE(segment.highest_speed.has_value());
    CHECK(*segment.highest_speed * unit ==
          doctest::Approx(block.numbers("highest-speed").at(0)).epsilon(1e-7));
  }
}

}  // namespace
}  // namespace pathvet
