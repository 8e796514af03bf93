#include <fmt/format.h>

#include <cmath>
#include <filesystem>
#include <string>

#include <doctest/doctest.h>

#include "pathvet/kinematics/chain.hpp"
#include "pathvet/retiming/profile.hpp"
#include "pathvet/xml/rewrite.hpp"
#include "retiming/best_partition.hpp"
#include "retiming/support.hpp"

namespace pathvet {
namespace {

using namespace test;

constexpr double degree = radians_per_degree;

/// The planar arm's line of reference values 4.1, r = 700 to 998 mm.
const std::string stretch_out = R"(<path version="1" cell="c" speed="250" orientation="free">
<waypoint id="A"> <joints>-34.7719440319486 93.58332169847198</joints> </waypoint>
<waypoint id="B" move="linear"> <pose position="998 0 0"/> </waypoint>
</path>
)";

TEST_CASE("one speed a segment: the closed forms of the highest speed") {
  // Reference values 4.1: 97.281874 mm/s for J2 at 180 deg/s.
  const Retiming line = retimed(stretch_out, cell_of(planar_cell), by_segment());
  CHECK(line.segments[0].stretches[0].speed == doctest::Approx(97.281874).epsilon(1e-8));
  CHECK(line.limits[static_cast<std::size_t>(line.segments[0].stretches[0].limit)] == "J2");
  CHECK(line.segments[0].stretches[0].where == doctest::Approx(1));
  CHECK(line.text.find("speed=\"97.2818\"") != std::string::npos);
  CHECK(too_fast(line.after) == 0);
  // 4.6: L d = 83.775804 mm/s for J1 at 120 deg/s, 40 mm off the axis.
  const Retiming over = retimed(overhead_path, cell_of(six_joint_cell("120", "1000")), by_segment());
  CHECK(over.segments[0].stretches[0].speed == doctest::Approx(83.775804).epsilon(1e-7));
  CHECK(over.text.find("speed=\"83.7758\"") != std::string::npos);
  CHECK(too_fast(over.after) == 0);
}

TEST_CASE("the bound of speed limits alone: closed forms") {
  // Reference values 6.2: 2 (S - s*) / v + 2 atan(s* / d) / L.
  const Retiming over = retimed(overhead_path, cell_of(six_joint_cell("120", "1000")));
  CHECK(over.before.duration == doctest::Approx(4));
  CHECK(over.bound == doctest::Approx(4.459716581).epsilon(1e-6));
  CHECK(over.gap() < 0.05);
  CHECK(too_fast(over.after) == 0);
}

TEST_CASE("a turn on the spot past the wrist singularity: its turn-rate is lowered") {
  // Reference values 4.7: 5 degrees beside it, 80 degrees at 90 deg/s, J4 at most 420 deg/s.
  std::string text = six_joint_cell("1000", "420");
  text.replace(text.find("</arm>"), 6, "</arm><tool name=\"t\" position=\"0 0 -100\"/>");
  const Cell cell = cell_of(text);
  JointVector start(6);
  start << 20, 60, 10, -84.07005650847098, 40.25913784006729, 0;
  const Pose begin = Chain(cell.arm, cell.tools[0].placement).forward(start * degree);
  const Vector3 turn(-19.456827744135524, -7.08170615211017, -77.27406610312543);
  const Matrix3 end = rotation_from_vector(turn * degree) * begin.rotation;
  const Eigen::Quaterniond q(end);
  const std::string path = fmt::format(
      "<path version=\"1\" cell=\"c\" tool=\"t\" speed=\"250\">\n"
      "<waypoint id=\"A\"> <joints>20 60 10 -84.07005650847098 40.25913784006729 0</joints> </waypoint>\n"
      "<waypoint id=\"B\" move=\"linear\"> <pose position=\"{:.17g} {:.17g} {:.17g}\" quaternion=\"{:.17g} "
      "{:.17g} {:.17g} "
      "{:.17g}\"/> </waypoint>\n</path>\n",
      begin.position.x(), begin.position.y(), begin.position.z(), q.w(), q.x(), q.y(), q.z());
  const Retiming one = retimed(path, cell, by_segment());
  CHECK(one.segments[0].turn_on_the_spot);
  CHECK(one.segments[0].stretches[0].speed / degree == doctest::Approx(36.605412).epsilon(1e-7));
  CHECK(one.text.find("turn-rate=\"36.6054\"") != std::string::npos);
  CHECK(one.bound == doctest::Approx(0.995247768).epsilon(1e-6));
  const Retiming many = retimed(path, cell);
  CHECK(too_fast(many.after) == 0);
  CHECK(many.gap() < 0.05);
}

TEST_CASE("a circle by two sliding joints: constant speed costs 2 pi against 4 sqrt 2") {
  Cell cell = cell_of(gantry_cell);
  for (Joint& joint : cell.arm.joints) joint.acceleration.reset();
  const std::string text = R"(<path version="1" cell="c" speed="400" orientation="free">
<waypoint id="A"> <joints>100 0</joints> </waypoint>
<waypoint id="B" move="circular"> <via position="70.71067811865476 70.71067811865476 0"/> <pose position="0 100 0"/> </waypoint>
</path>
)";
  const Retiming one = retimed(text, cell, by_segment());
  CHECK(one.after.duration == doctest::Approx(2 * pi * 100 / 200 / 4).epsilon(1e-6));
  CHECK(one.bound == doctest::Approx(std::sqrt(2.0) * 100 / 200).epsilon(1e-6));
  const Retiming many = retimed(text, cell);
  CHECK(too_fast(many.after) == 0);
  CHECK(many.after.duration < 1.03 * many.bound);
  CHECK(many.after.segments.size() == static_cast<std::size_t>(many.extra_waypoints) + 1);
  double length = 0;
  for (const SegmentResult& segment : many.after.segments) length += segment.length;
  CHECK(length == doctest::Approx(50 * pi).epsilon(1e-12));
}

TEST_CASE("accelerations inside a segment hold too") {
  // At constant speed v on a circle of radius r an axis needs v^2 / r.
  const std::string text = R"(<path version="1" cell="c" speed="199" orientation="free">
<waypoint id="A"> <joints>25 0</joints> </waypoint>
<waypoint id="B" move="circular"> <via position="0 25 0"/> <pose position="-25 0 0"/> </waypoint>
</path>
)";
  const Retiming one = retimed(text, cell_of(gantry_cell), by_segment());
  CHECK(one.segments[0].stretches[0].speed == doctest::Approx(std::sqrt(400.0 * 25)).epsilon(1e-7));
  CHECK(too_fast(one.before) > 0);
  CHECK(too_fast(one.after) == 0);
}

TEST_CASE("the text is changed where it has to be and nowhere else") {
  const Retiming over = retimed(overhead_path, cell_of(six_joint_cell("120", "1000")));
  REQUIRE(over.extra_waypoints > 1);
  // Taking out the lines that came in, and the one attribute, gives back the text byte by byte.
  std::string left;
  std::size_t at = 0;
  int extra = 0;
  while (at < over.text.size()) {
    const std::size_t end = over.text.find('\n', at) + 1;
    const std::string line = over.text.substr(at, end - at);
    if (line.rfind("\t<waypoint id='B.", 0) == 0) {
      ++extra;
    } else {
      left += line;
    }
    at = end;
  }
  CHECK(extra == over.extra_waypoints);
  CHECK(left == overhead_path);
  const Retiming segment = retimed(overhead_path, cell_of(six_joint_cell("120", "1000")), by_segment());
  std::string expected = overhead_path;
  expected.insert(expected.find("move=\"linear\"") + 13, " speed=\"83.7758\"");
  CHECK(segment.text == expected);
  // A path that holds stays as it is.
  const Retiming calm = retimed(overhead_path, cell_of(six_joint_cell("1000", "1000")));
  CHECK(calm.text == overhead_path);
  CHECK(calm.gap() == doctest::Approx(0).epsilon(1e-9));
}

TEST_CASE("a reserve keeps a share of every limit free") {
  RetimeOptions options = by_segment();
  options.reserve = 0.25;
  const Retiming line = retimed(stretch_out, cell_of(planar_cell), options);
  CHECK(line.segments[0].stretches[0].speed == doctest::Approx(0.75 * 97.281874).epsilon(1e-7));
  CHECK(line.after.segments[0].peak_ratio <= 0.75);
  CHECK(line.after.segments[0].peak_ratio > 0.7499);
}

TEST_CASE("speeds rise above the programmed ones only when asked to") {
  std::string slow = stretch_out;
  slow.replace(slow.find("250"), 3, "20");
  CHECK(retimed(slow, cell_of(planar_cell)).text == slow);
  RetimeOptions options = by_segment();
  options.faster = true;
  const Retiming fast = retimed(slow, cell_of(planar_cell), options);
  CHECK(fast.segments[0].stretches[0].speed == doctest::Approx(97.281874).epsilon(1e-7));
  CHECK(fast.after.duration < 0.25 * fast.before.duration);
  CHECK(too_fast(fast.after) == 0);
}

TEST_CASE("where no speed helps, the segment stays as it was and says so") {
  // Through the hole round the shoulder (reference values 4.4).
  const std::string text = R"(<path version="1" cell="c" speed="250" orientation="free">
<waypoint id="A"> <joints>117.70083353425544 134.6782640060196</joints> </waypoint>
<waypoint id="B" move="linear"> <pose position="400 150 0"/> </waypoint>
</path>
)";
  const Retiming hole = retimed(text, cell_of(planar_cell));
  CHECK(hole.text == text);
  CHECK(!hole.segments[0].hopeless.empty());
  CHECK(!hole.segments[0].changed());
  CHECK(hole.is_flagged());
}

TEST_CASE("every fixture: nothing too fast is left where speeds help, and nothing else is touched") {
  const std::filesystem::path folder = std::filesystem::path(PATHVET_SOURCE_DIR) / "fixtures" / "paths";
  int changed = 0;
  for (const auto& entry : std::filesystem::directory_iterator(folder)) {
    if (entry.path().extension() != ".xml" || entry.path().string().find("2000") != std::string::npos)
      continue;
    const auto input = read_path(entry.path().string());
    if (!input.value) continue;
    CAPTURE(entry.path().filename().string());
    const std::string text = *read_text(entry.path().string());
    const Recording recording = recording_of(input.value->path, input.value->cell);
    const auto reading = retime(recording, text, input.value->path, input.value->cell, {});
    REQUIRE(reading.value.has_value());
    const Retiming& r = *reading.value;
    bool hopeless = false;
    for (const RetimedSegment& segment : r.segments) hopeless = hopeless || !segment.hopeless.empty();
    if (!hopeless) CHECK(too_fast(r.after) == 0);
    if (too_fast(r.before) == 0) CHECK(r.text == text);
    changed += r.text != text;
    // The time-optimal profile keeps the speed limits too, so it can't beat their bound.
    const Profile profile = time_optimal_profile(recording, input.value->path, input.value->cell, {});
    CHECK(std::isfinite(profile.duration));
    CHECK(profile.duration >= r.bound * (1 - 1e-6));
    for (const ProfilePoint& point : profile.points) {
      for (std::size_t k = 0; k < input.value->cell.arm.joints.size(); ++k) {
        const Joint& joint = input.value->cell.arm.joints[k];
        const auto j = static_cast<Eigen::Index>(k);
        CHECK_UNARY(std::abs(point.speeds[j]) <= joint.speed * (1 + 1e-9));
        if (joint.acceleration)
          CHECK_UNARY(std::abs(point.accelerations[j]) <= *joint.acceleration * (1 + 1e-6));
      }
    }
    // The same again changes nothing: what was written holds.
    const auto again = parse_path(r.text, "again", input.value->cell);
    REQUIRE(again.value.has_value());
    const auto second =
        retime(recording_of(*again.value, input.value->cell), r.text, *again.value, input.value->cell, {});
    CHECK(second.value->text == r.text);
  }
  CHECK(changed >= 4);
}

TEST_CASE("rounded corners: both sides hold, and the corners keep their shape") {
  const std::string text = R"(<path version="1" cell="c" speed="195" orientation="free" blend="20">
<waypoint id="A"> <joints>0 0</joints> </waypoint>
<waypoint id="B" move="linear"> <pose position="100 0 0"/> </waypoint>
<waypoint id="C" move="linear" speed="150"> <pose position="150 87 0"/> </waypoint>
<waypoint id="D" move="linear"> <pose position="240 10 0"/> </waypoint>
<waypoint id="E" move="linear"> <pose position="500 10 0"/> </waypoint>
</path>
)";
  for (const RetimeOptions& options : {RetimeOptions{}, by_segment()}) {
    const Retiming corners = retimed(text, cell_of(gantry_cell), options);
    CHECK(too_fast(corners.before) > 0);
    CHECK(too_fast(corners.after) == 0);
    CHECK(corners.after.length == doctest::Approx(corners.before.length).epsilon(1e-9));
    MESSAGE("gap with rounded corners ", corners.gap());
  }
}

TEST_CASE("a profile of a path: joint moves are trapezoids, stops are stops") {
  // 6.1 by the two sliding joints: 300 mm at 200 mm/s with 400 mm/s^2 takes 300/200 + 200/400.
  const Cell cell = cell_of(gantry_cell);
  const std::string text = R"(<path version="1" cell="c" speed="1000" orientation="free">
<waypoint id="A"> <joints>0 0</joints> </waypoint>
<waypoint id="B" move="joint" dwell="0.5"> <joints>300 100</joints> </waypoint>
<waypoint id="C" move="joint"> <joints>300 110</joints> </waypoint>
</path>
)";
  const Path path = path_of(text, cell);
  const Profile profile = time_optimal_profile(recording_of(path, cell), path, cell, {});
  CHECK(profile.durations[0] == doctest::Approx(2.0).epsilon(1e-6));
  CHECK(profile.durations[1] == doctest::Approx(2 * std::sqrt(10.0 / 400)).epsilon(1e-6));
  CHECK(profile.duration == doctest::Approx(2.5 + 2 * std::sqrt(10.0 / 400)).epsilon(1e-6));
  CHECK(profile.points.front().speeds.norm() == 0);
  CHECK(profile.points.back().speeds.norm() == 0);
}

TEST_CASE("a profile runs on through a waypoint on a straight line and through rounded corners") {
  const Cell cell = cell_of(gantry_cell);
  const auto duration = [&](const std::string& text) {
    const Path path = path_of(text, cell);
    return time_optimal_profile(recording_of(path, cell), path, cell, {}).duration;
  };
  const std::string begin =
      "<path version=\"1\" cell=\"c\" speed=\"150\" orientation=\"free\"><waypoint id=\"A\"> <joints>0 "
      "0</joints> </waypoint>";
  const double whole = duration(
      begin + "<waypoint id=\"B\" move=\"linear\"> <pose position=\"200 100 0\"/> </waypoint></path>");
  const double parts =
      duration(begin +
               "<waypoint id=\"M\" move=\"linear\"> <pose position=\"60 30 0\"/> </waypoint>"
               "<waypoint id=\"B\" move=\"linear\"> <pose position=\"200 100 0\"/> </waypoint></path>");
  CHECK(parts == doctest::Approx(whole).epsilon(1e-5));
  const std::string corner =
      "<waypoint id=\"M\" move=\"linear\" blend=\"{}\"> <pose position=\"100 0 0\"/> </waypoint>"
      "<waypoint id=\"B\" move=\"linear\"> <pose position=\"100 100 0\"/> </waypoint></path>";
  const double sharp = duration(begin + fmt::format(fmt::runtime(corner), 0));
  const double rounded = duration(begin + fmt::format(fmt::runtime(corner), 30));
  CHECK(rounded < 0.95 * sharp);
}

}  // namespace
}  // namespace pathvet
