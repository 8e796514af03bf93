#include <doctest/doctest.h>

#include <cmath>
#include <sstream>

#include "pathvet/checks/check_path.hpp"
#include "pathvet/kinematics/chain.hpp"
#include "pathvet/xml/read.hpp"

// Positioners, arms with joints to spare, and the speeds of joint centres.

namespace pathvet {
namespace {

struct Collected : CheckObserver {
  [[nodiscard]] bool wants_samples() const override { return true; }
  void sample(const TraceSample& sample) override {
    fractions.push_back(sample.fraction);
    joints.push_back(sample.joints);
    speeds.push_back(sample.speeds);
  }
  std::vector<double> fractions;
  std::vector<JointVector> joints, speeds;
};

Cell fixture_cell(const std::string& name) {
  Reading<Cell> cell = read_cell(std::string(PATHVET_SOURCE_DIR) + "/fixtures/cells/" + name);
  REQUIRE(cell.value);
  return *cell.value;
}

PathResult checked(const std::string& text, const Cell& cell, const CheckOptions& options = {},
                   CheckObserver* observer = nullptr) {
  const Reading<Path> path = parse_path(text, "path.xml", cell);
  for (const Fault& fault : path.faults) MESSAGE(to_string(fault));
  REQUIRE(path.value);
  Reading<PathResult> result = check_path(*path.value, cell, options, observer);
  for (const Fault& fault : result.faults) MESSAGE(to_string(fault));
  REQUIRE(result.value);
  return *result.value;
}

const char* seven_joint_path = R"(<path version="1" cell="c.xml" speed="50">
  <waypoint id="a"> <joints>0 30 0 -90 0 60 0</joints> </waypoint>
  <waypoint id="b" move="linear"> <pose position="%X 120 %Z" %Q/> </waypoint>
  <waypoint id="c" move="linear"> <pose position="%X 0 %Z" %Q/> </waypoint>
</path>)";

std::string seven_joints(const Cell& cell) {
  JointVector q(7);
  q << 0, 30, 0, -90, 0, 60, 0;
  q *= radians_per_degree;
  const Pose pose = Chain(cell.arm).forward(q);
  const Eigen::Quaterniond r = quaternion(pose.rotation);
  const auto number = [](double value) {
    std::ostringstream out;
    out.precision(17);
    out << value;
    return out.str();
  };
  std::string text = seven_joint_path;
  const auto replace = [&](const std::string& what, const std::string& with) {
    for (std::size_t at = text.find(what); at != std::string::npos; at = text.find(what))
      text.replace(at, what.size(), with);
  };
  replace("%X", number(pose.position.x()));
  replace("%Z", number(pose.position.z()));
  replace("%Q", "quaternion=\"" + number(r.w()) + " " + number(r.x()) + " " + number(r.y()) + " " +
                    number(r.z()) + "\"");
  return text;
}

}  // namespace

TEST_CASE("a TCP that stands still in the world moves no arm joint while the table turns under it") {
  // The table turns by 60 degrees about its z axis; in the frame on it the TCP goes round an arc by -60
  // degrees.
  const Cell cell = fixture_cell("turning-table.xml");
  Collected samples;
  const PathResult result =
      checked(R"(<path version="1" cell="c.xml" tool="welding torch" frame="housing" speed="25">
    <waypoint id="a"> <external positioner="table">0 0</external> <joints>0 80 -10 0 84 0</joints> </waypoint>
    <waypoint id="b" move="linear"> <external positioner="table">0 0</external>
      <pose position="-80 0 30" roll-pitch-yaw="180 -10 0"/> </waypoint>
    <waypoint id="c" move="circular"> <external positioner="table">0 60</external>
      <via position="-69.28203230275509 40.0 30"/>
      <pose position="-40 69.28203230275509 30" roll-pitch-yaw="180 -10 -60"/> </waypoint>
  </path>)",
              cell, {}, &samples);
  REQUIRE(result.segments.size() == 2);
  // Segment 2 alone: the last sample before it is the configuration that has to be kept.
  const SegmentResult& still = result.segments[1];
  CHECK(still.duration > 1);
  CHECK(still.peak_tcp_speed < 1e-6);
  CHECK(still.peak_point_speed < 1e-6);
  const JointVector last = samples.joints.back();
  CHECK((last - samples.joints[static_cast<std::size_t>(result.segments[0].samples)]).cwiseAbs().maxCoeff() <
        1e-9);
  CHECK(result.axes.back().name == "table.turn");
  CHECK(result.axes.back().travel == doctest::Approx(60 * radians_per_degree).epsilon(1e-12));
}

TEST_CASE("seven joints: the configuration does not depend on the sampling") {
  const Cell cell = fixture_cell("seven-joint-inspection.xml");
  const std::string text = seven_joints(cell);
  Collected coarse, fine;
  CheckOptions options;
  const PathResult first = checked(text, cell, options, &coarse);
  options.step_length /= 10;
  options.step_angle /= 10;
  const PathResult second = checked(text, cell, options, &fine);
  CHECK((coarse.joints.back() - fine.joints.back()).cwiseAbs().maxCoeff() < 1e-6);
  for (std::size_t i = 0; i < first.axes.size(); ++i) {
    CHECK(std::abs(first.axes[i].min - second.axes[i].min) < 1e-6);
    CHECK(std::abs(first.axes[i].max - second.axes[i].max) < 1e-6);
  }
  CHECK(first.proven_fraction == 1);
  // The redundant joint moves: the null space is used.
  CHECK(first.axes[2].travel > 1e-3);
}

TEST_CASE("seven joints: a closed path that does not come back says so") {
  const Cell cell = fixture_cell("seven-joint-inspection.xml");
  Collected samples;
  const PathResult result = checked(seven_joints(cell), cell, {}, &samples);
  CHECK(!result.segments[0].drift);
  REQUIRE(result.segments[1].drift);
  const JointVector measured = samples.joints.back() - samples.joints.front();
  CHECK((*result.segments[1].drift - measured).cwiseAbs().maxCoeff() < 1e-12);
  CHECK(measured.cwiseAbs().maxCoeff() > 1e-6);
}

TEST_CASE("the elbow of the planar arm moves at its link's length times the first joint's speed") {
  // Elbow speed l1 |q1'|: closed form for the planar arm with two joints (any textbook; derived).
  const Reading<Cell> cell = parse_cell(R"(<cell version="1"><arm characteristic-length="500">
    <joint name="J1" type="revolute" lower="-180" upper="180" speed="500"><dh theta="0" d="0" a="600" alpha="0"/></joint>
    <joint name="J2" type="revolute" lower="-180" upper="180" speed="500"><dh theta="0" d="0" a="400" alpha="0"/></joint>
  </arm></cell>)",
                                        "cell.xml");
  REQUIRE(cell.value);
  const std::string text = R"(<path version="1" cell="c.xml" speed="250" orientation="free">
    <waypoint id="a"> <joints>-40 80</joints> </waypoint>
    <waypoint id="b" move="linear"> <pose position="700 250 0"/> </waypoint></path>)";
  Collected samples;
  CheckOptions options;
  const PathResult result = checked(text, *cell.value, options, &samples);
  double fastest = 0;
  for (const JointVector& speeds : samples.speeds) fastest = std::max(fastest, 600 * std::abs(speeds[0]));
  CHECK(result.segments[0].peak_point == "centre of J2");
  CHECK(result.segments[0].peak_point_speed == doctest::Approx(fastest).epsilon(1e-12));
  CHECK(result.segments[0].peak_tcp_speed == doctest::Approx(250).epsilon(1e-9));

  options.reduced_speed = 0.9 * fastest;
  const PathResult flagged = checked(text, *cell.value, options);
  bool elbow = false;
  for (const Finding& finding : flagged.findings) {
    if (finding.code != Code::arm_speed || finding.point != "centre of J2") continue;
    elbow = true;
    CHECK(finding.value == doctest::Approx(fastest).epsilon(1e-3));
    CHECK(level(finding.code) == Level::warning);
  }
  CHECK(elbow);
}

}  // namespace pathvet
