#include <algorithm>
#include <sstream>

#include <doctest/doctest.h>

#include <nlohmann/json.hpp>

#include "pathvet/model/units.hpp"
#include "pathvet/reporting/caution.hpp"
#include "pathvet/reporting/retime_report.hpp"

namespace pathvet {
namespace {

RetimeReport sample() {
  RetimeReport report;
  report.tool_version = "0.1.0";
  report.file = "in.xml";
  report.output = "out.xml";
  report.by = "stretch";
  report.before.name = "rim";
  report.before.duration = 2;
  report.flagged = true;
  Retiming r;
  r.before = report.before;
  r.after = report.before;
  r.after.duration = 2.5;
  r.bound = 2.4;
  r.extra_waypoints = 1;
  r.limits = {"J1", "J4"};
  RetimedSegment cut;
  cut.index = 1;
  cut.from = "A";
  cut.to = "B";
  cut.turn_on_the_spot = true;
  cut.old_speed = 90 * radians_per_degree;
  cut.old_duration = 1;
  cut.new_duration = 1.5;
  cut.bound = 1.4;
  cut.stretches = {{"B.1", 0, 0.25, 90 * radians_per_degree, 0.25, -1, 0},
                   {"B", 0.25, 1, 45 * radians_per_degree, 1.25, 1, 0.5}};
  RetimedSegment left;
  left.index = 2;
  left.from = "B";
  left.to = "C";
  left.hopeless = "the arm changes branch";
  left.old_speed = 120;
  left.old_duration = left.new_duration = left.bound = 1;
  left.stretches = {{"C", 0, 1, 120, 1, -1, 0}};
  r.segments = {cut, left};
  report.retiming = r;
  return report;
}

TEST_CASE("the account as text: what changed, what was left, what it costs") {
  std::ostringstream out;
  write_retime_text(sample(), out, {120, false, false});
  const std::string text = out.str();
  for (const char* piece :
       {"FLAGGED: rim, re-timed by stretch", "cycle before   2 s", "cycle now      2.5 s (+25 %)",
        "the gap to it is 4.17 %", "45 deg/s", "J4 at 50 %", "LEFT AS IT WAS",
        "no speed helps: the arm changes branch", "7.14 %"}) {
    CAPTURE(piece);
    CHECK(text.find(piece) != std::string::npos);
  }
  std::ostringstream narrow;
  write_retime_text(sample(), narrow, {60, false, false});
  std::istringstream lines(narrow.str());
  for (std::string line; std::getline(lines, line);) CHECK(line.size() <= 60);
  CHECK(text.find("Caution: ") != std::string::npos);
}

TEST_CASE("the account as data: the order of members, units, nulls") {
  std::ostringstream out;
  write_retime_json(sample(), out);
  const auto root = nlohmann::ordered_json::parse(out.str());
  CHECK(root.begin().key() == "format");
  CHECK(root.at("caution") == caution());
  CHECK(root.at("gap_percent").get<double>() == doctest::Approx(100.0 / 24));
  const auto& cut = root.at("segments").at(0);
  CHECK(cut.at("unit") == "deg/s");
  CHECK(cut.at("outcome") == "changed");
  CHECK(cut.at("stretches").at(0).at("joint").is_null());
  CHECK(cut.at("stretches").at(1).at("joint") == "J4");
  CHECK(cut.at("stretches").at(1).at("speed") == 45);
  CHECK(root.at("segments").at(1).at("reason") == "the arm changes branch");
  CHECK(!root.contains("time_optimal"));
}

TEST_CASE("the profile as CSV: degrees, a header, one row a point") {
  Arm arm;
  Joint turning, sliding;
  turning.name = "J1";
  sliding.name = "rail, long";
  sliding.type = JointType::prismatic;
  arm.joints = {turning, sliding};
  Profile profile;
  ProfilePoint point;
  point.segment = 3;
  point.fraction = 0.5;
  point.time = 1.25;
  point.tcp_speed = 100;
  point.joints = JointVector(2);
  point.joints << 45 * radians_per_degree, 12.5;
  point.speeds = point.joints;
  point.accelerations = JointVector::Zero(2);
  profile.points = {point};
  std::ostringstream out;
  write_profile_csv(profile, arm, out);
  CHECK(out.str() ==
        "segment,fraction,time_s,tcp_speed,J1,\"rail, long\",J1_speed,\"rail, long_speed\",J1_acceleration,"
        "\"rail, long_acceleration\"\n3,0.5,1.25,100,45,12.5,45,12.5,0,0\n");
}

}  // namespace
}  // namespace pathvet
