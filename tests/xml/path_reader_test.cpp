#include <doctest/doctest.h>

#include "broken_inputs.hpp"
#include "pathvet/model/units.hpp"
#include "pathvet/xml/read.hpp"

namespace pathvet {
namespace {

using test::Change;

const std::string cell_text = R"(<cell version="1" name="c">
  <arm name="a" characteristic-length="500">
    <joint name="J1" type="revolute" lower="-170" upper="170" speed="180"><mount axis="0 0 1"/></joint>
    <joint name="J2" type="prismatic" lower="0" upper="500" speed="800"><mount axis="0 0 1"/></joint>
  </arm>
  <tool name="t"/> <tool name="u"/> <frame name="f"/> <frame name="g" carried-by="p"/>
  <positioner name="p">
    <joint name="T1" type="revolute" lower="-90" upper="90" speed="60"><mount axis="1 0 0"/></joint>
    <joint name="T2" type="prismatic" lower="-5" upper="5" speed="60"><mount axis="0 0 1"/></joint>
  </positioner>
  <positioner name="r">
    <joint name="R" type="revolute" continuous="true" speed="60"><mount axis="1 0 0"/></joint>
  </positioner>
</cell>)";

const std::string sound = R"(<path version="1" name="flange trim" cell="c.xml" tool="t" frame="f" speed="120">
  <waypoint id="A"><joints>10 20</joints></waypoint>
  <waypoint id="B" move="joint"><pose position="0 0 80" roll-pitch-yaw="180 0 0"/></waypoint>
  <waypoint id="C" move="linear"><pose position="0 300 20" roll-pitch-yaw="180 0 0"/></waypoint>
  <waypoint id="D" move="circular"><via position="60 360 20"/><pose position="120 300 20" roll-pitch-yaw="180 0 0"/></waypoint>
</path>
)";

Cell cell_of(const std::string& text) {
  const Reading<Cell> reading = parse_cell(text, "c.xml");
  REQUIRE_MESSAGE(reading.value, test::listed(reading.faults));
  return *reading.value;
}

std::string faults_of(const std::string& text, const std::string& cell = cell_text) {
  return test::listed(parse_path(text, "p.xml", cell_of(cell)).faults);
}

Path path_of(const std::string& text) {
  const Reading<Path> reading = parse_path(text, "paths/p.xml", cell_of(cell_text));
  REQUIRE_MESSAGE(reading.value, test::listed(reading.faults));
  CHECK(reading.faults.empty());
  return *reading.value;
}

TEST_CASE("a sound path is read whole") {
  const Path path = path_of(sound);
  CHECK(path.file == "paths/p.xml");
  CHECK(path.name == "flange trim");
  CHECK(path.cell_file == "paths/c.xml");
  REQUIRE(path.waypoints.size() == 4);
  const Waypoint& start = path.waypoints[0];
  CHECK(start.id == "A");
  CHECK(start.move == Move::start);
  CHECK(start.place.line == 2);
  CHECK(start.place.column == 3);
  REQUIRE(start.joints);
  CHECK((*start.joints)[0] == doctest::Approx(pi / 18));
  CHECK((*start.joints)[1] == 20);
  CHECK_FALSE(start.pose);
  const Waypoint& joint = path.waypoints[1];
  CHECK(joint.move == Move::joint);
  REQUIRE(joint.pose);
  CHECK(joint.pose->position == Vector3(0, 0, 80));
  CHECK((joint.pose->rotation * Vector3::UnitZ() + Vector3::UnitZ()).norm() == 0);
  CHECK(path.waypoints[2].move == Move::linear);
  const Waypoint& arc = path.waypoints[3];
  CHECK(arc.move == Move::circular);
  CHECK(arc.via.value() == Vector3(60, 360, 20));
  CHECK(arc.place.line == 5);
}

TEST_CASE("what nobody sets has the contract's default") {
  const Waypoint waypoint = path_of(sound).waypoints[2];
  CHECK(waypoint.tool == 0);
  CHECK(waypoint.frame == 0);
  CHECK(waypoint.speed == 120);
  CHECK(waypoint.turn_rate == doctest::Approx(pi / 2));
  CHECK(waypoint.joint_rate == 1);
  CHECK(waypoint.blend == 0);
  CHECK(waypoint.dwell == 0);
  CHECK(waypoint.orientation == Orientation::full);
  const Waypoint bare = path_of(test::changed(sound, R"( tool="t" frame="f")", "")).waypoints[2];
  CHECK_FALSE(bare.tool);
  CHECK_FALSE(bare.frame);
}

TEST_CASE("a path's settings hold for each waypoint that has none of its own") {
  std::string text =
      test::changed(sound, R"(speed="120")",
                    R"(speed="+1.2e2" turn-rate="45" blend="5" joint-rate="40" orientation="axis")");
  text = test::changed(
      text, R"(id="C")",
      R"(id="C" tool="u" frame="g" speed="60" turn-rate="10" blend="0" joint-rate="100" dwell="0.4" orientation="free")");
  const Path path = path_of(text);
  const Waypoint& own = path.waypoints[2];
  CHECK(own.tool == 1);
  CHECK(own.frame == 1);
  CHECK(own.speed == 60);
  CHECK(own.turn_rate == doctest::Approx(pi / 18));
  CHECK(own.blend == 0);
  CHECK(own.joint_rate == 1);
  CHECK(own.dwell == 0.4);
  CHECK(own.orientation == Orientation::free);
  const Waypoint& preset = path.waypoints[3];
  CHECK(preset.tool == 0);
  CHECK(preset.frame == 0);
  CHECK(preset.speed == 120);
  CHECK(preset.turn_rate == doctest::Approx(pi / 4));
  CHECK(preset.blend == 5);
  CHECK(preset.joint_rate == doctest::Approx(0.4));
  CHECK(preset.dwell == 0);
  CHECK(preset.orientation == Orientation::axis);
}

TEST_CASE("a path of joint moves alone needs no speed") {
  const std::string text = R"(<path version="1" cell="c.xml"><waypoint id="A"><joints>0 0</joints></waypoint>
<waypoint id="B" move="joint"><joints>1 1</joints></waypoint></path>)";
  CHECK(faults_of(text) == "");
  CHECK(faults_of(test::changed(text, "move=\"joint\"><joints>1 1</joints>", "move=\"linear\"><pose/>")) ==
        "2:1: a linear move without speed; expected the attribute speed (mm/s) here or at <path>");
  CHECK(faults_of(test::changed(text, "move=\"joint\"><joints>1 1</joints>",
                                "move=\"linear\" speed=\"5\"><pose/>")) == "");
}

TEST_CASE("a joint list may be broken by comments, CDATA and character references") {
  const Path path = path_of(test::changed(sound, "10 20", "\n 10 <!-- J1 --><![CDATA[ +2]]>&#48; "));
  CHECK((*path.waypoints[0].joints)[1] == 20);
}

TEST_CASE("a positioner's values hold until others are given") {
  std::string text =
      test::changed(sound, "</joints>", "</joints><external positioner=\"p\">90 -5</external>");
  text = test::changed(text, R"(<pose position="0 300 20")",
                       R"(<external positioner="r">720</external><pose position="0 300 20")");
  const Path path = path_of(text);
  for (const Waypoint& waypoint : path.waypoints) {
    REQUIRE(waypoint.external.size() == 2);
    CHECK(waypoint.external[0][0] == doctest::Approx(pi / 2));
    CHECK(waypoint.external[0][1] == -5);
  }
  CHECK(path.waypoints[1].external[1][0] == 0);
  CHECK(path.waypoints[2].external[1][0] == doctest::Approx(4 * pi));
  CHECK(path.waypoints[3].external[1][0] == doctest::Approx(4 * pi));
}

TEST_CASE("a start without a positioner's values needs 0 inside its limits") {
  const std::string cell = test::changed(cell_text, R"(lower="-90" upper="90")", R"(lower="10" upper="90")");
  CHECK(faults_of(sound, cell) ==
        "2:3: no <external> of the positioner \"p\" at the start, and 0 is outside the limits 10 to 90 of "
        "its joint "
        "\"T1\"");
  CHECK(faults_of(test::changed(sound, "</joints>", "</joints><external positioner=\"p\">10 0</external>"),
                  cell) == "");
}

TEST_CASE("each fault of a path stands at its place") {
  const std::string start = "<joints>10 20</joints>";
  const std::string settings = R"(speed="120")";
  const std::string joint_pose = R"(<pose position="0 0 80" roll-pitch-yaw="180 0 0"/>)";
  const std::string line_pose = R"(<pose position="0 300 20" roll-pitch-yaw="180 0 0"/>)";
  const std::string via = R"(<via position="60 360 20"/>)";
  const std::vector<Change> changes{
      // the root
      {"version=\"1\" ", "", "1:1: <path> has no attribute \"version\""},
      {"version=\"1\"", "version=\"2\"", "1:7: version \"2\" of <path>; expected \"1\""},
      {"cell=\"c.xml\" ", "", "1:1: <path> has no attribute \"cell\""},
      {"cell=\"c.xml\"", "cell=\"\"", "1:38: cell of <path> is empty; expected the name of a cell file"},
      {settings, "dwell=\"1\" " + settings,
       "1:70: unknown attribute \"dwell\" of <path>; expected version, name, cell, tool, frame, speed, "
       "turn-rate, "
       "blend, joint-rate or orientation"},
      {"<waypoint id=\"A\"", "<!-- --> <point/><waypoint id=\"A\"",
       "2:12: unknown element <point> in <path>; expected waypoint"},
      {"</path>", "end</path>", "6:1: text in <path>, where none belongs"},
      // settings
      {"tool=\"t\"", "tool=\"T\"", "1:51: no tool \"T\" in the cell; expected \"t\" or \"u\""},
      {"frame=\"f\"", "frame=\"\"", "1:60: no frame \"\" in the cell; expected \"f\" or \"g\""},
      {settings, "speed=\"0\"", "1:70: speed of <path>: \"0\" is not above 0"},
      {settings, settings + " turn-rate=\"0\"", "1:82: turn-rate of <path>: \"0\" is not above 0"},
      {settings, settings + " blend=\"-1\"", "1:82: blend of <path>: \"-1\" is below 0"},
      {settings, settings + " joint-rate=\"0\"", "1:82: joint-rate of <path>: \"0\" is not above 0"},
      {settings, settings + " joint-rate=\"100.5\"",
       "1:82: joint-rate 100.5; expected at most 100 (percent)"},
      {settings, settings + " orientation=\"Full\"",
       "1:82: orientation \"Full\"; expected \"full\", \"axis\" or \"free\""},
      {"id=\"B\"", "id=\"B\" tool=\"v\" frame=\"h\" speed=\"nan\" turn-rate=\"\" dwell=\"-0.1\"",
       "3:20: no tool \"v\" in the cell; expected \"t\" or \"u\"\n"
       "3:29: no frame \"h\" in the cell; expected \"f\" or \"g\"\n"
       "3:39: speed of <waypoint>: \"nan\" is not a finite number\n"
       "3:51: turn-rate of <waypoint>: \"\" is not one number\n"
       "3:64: dwell of <waypoint>: \"-0.1\" is below 0"},
      // waypoints
      {"id=\"B\"", "", "3:3: <waypoint> has no attribute \"id\""},
      {"id=\"B\"", "id=\"\"", "3:13: id of <waypoint> is \"\"; expected a name, on one line and not empty"},
      {"id=\"C\"", "id=\"A\"", "4:13: the id \"A\" is taken by another waypoint"},
      {"id=\"A\"", "id=\"A\" move=\"joint\"",
       "2:20: the first waypoint is the start; expected no move there"},
      {"move=\"joint\"", "",
       "3:3: <waypoint> has no move; expected linear, circular or joint (the first waypoint alone has none)"},
      {"move=\"joint\"", "move=\"start\"",
       "3:20: move \"start\"; expected \"linear\", \"circular\" or \"joint\""},
      {start, "", "2:3: the start has neither <joints> nor <pose>; expected one or both"},
      {joint_pose, "", "3:3: a joint move without target; expected <joints> or <pose>"},
      {line_pose, "<joints>1 2</joints>",
       "4:3: a linear move without <pose>; expected the pose where it ends"},
      {line_pose, line_pose + "<Pose/>",
       "4:86: unknown element <Pose> in <waypoint>; expected joints, pose, via or external"},
      {line_pose, line_pose + "<pose/>", "4:86: a second <pose> in <waypoint>; expected one"},
      {start, start + start, "2:42: a second <joints> in <waypoint>; expected one"},
      {start, "10 20" + start, "2:20: text in <waypoint>, where none belongs"},
      // joints
      {"10 20", "10", "2:28: <joints> has 1 number; expected 2, one for each joint of the cell's arm"},
      {"10 20", "", "2:20: <joints> has 0 numbers; expected 2, one for each joint of the cell's arm"},
      {"10 20", "\r\n\r\n  10 2O", "4:3: <joints>: \"2O\" is not a number"},
      {"10 20", "<!-- x --> 10 1e999", "2:39: <joints>: \"1e999\" is out of the range of double precision"},
      {"<joints>10 20", "<joints unit=\"deg\">10 <b/> 20",
       "2:28: unknown attribute \"unit\" of <joints>; expected none\n"
       "2:42: unknown element <b> in <joints>; expected none"},
      // poses and arcs
      {"position=\"0 300 20\"", "position=\"0 300\"", "4:40: position of <pose>: 2 numbers; expected 3"},
      {joint_pose, joint_pose + via, "3:83: <via> belongs to a circular move alone"},
      {start, start + via, "2:42: <via> belongs to a circular move alone"},
      {via, "", "5:3: a circular move without <via>; expected a point of the arc"},
      {via, "<via/>", "5:36: <via> has no attribute \"position\""},
      {via, R"(<via position="60 360 20" quaternion="1 0 0 0"/>)",
       "5:62: unknown attribute \"quaternion\" of <via>; expected position"},
      {via, R"(<via position="0 300 20"/>)",
       "5:36: via is where the arc starts; expected a point between start and end"},
      {via, R"(<via position="120 300 20"/>)",
       "5:36: via is where the arc ends; expected a point between start and end"},
      {"120 300 20", "0 300 20", "5:36: the arc ends where it starts; expected two arcs for a full circle"},
      {"60 360 20", "60 300 20",
       "5:36: start, via and end of the arc are on a line; expected a linear move, or another via"},
      {"60 360 20", "200 300 20",
       "5:36: start, via and end of the arc are on a line; expected a linear move, or another via"},
      {R"(300 20" roll-pitch-yaw="180 0 0")", R"(300 20" roll-pitch-yaw="0 0 0")",
       "4:34: a turn of 180° from waypoint \"B\" has no short way; add a waypoint between\n"
       "5:63: a turn of 180° from waypoint \"C\" has no short way; add a waypoint between"},
      // positioners
      {start, start + "<external positioner=\"q\">1</external>",
       "2:52: no positioner \"q\" in the cell; expected \"p\" or \"r\""},
      {start, start + "<external>1</external>", "2:42: <external> has no attribute \"positioner\""},
      {start, start + "<external positioner=\"p\">1</external>",
       "2:67: <external> has 1 number; expected 2, one for each joint of \"p\""},
      {start, start + "<external positioner=\"r\">x</external>", "2:67: <external>: \"x\" is not a number"},
      {start, start + "<external positioner=\"r\">1</external><external positioner=\"r\">2</external>",
       "2:89: a second <external> of the positioner \"r\""},
      {start, start + "<external positioner=\"p\"> 0 5.1</external>",
       "2:68: the positioner \"p\" is outside the limits -5 to 5 of its joint \"T2\""},
  };
  REQUIRE(faults_of(sound) == "");
  for (const Change& change : changes) {
    CAPTURE(change.from);
    CAPTURE(change.to);
    CHECK(faults_of(test::changed(sound, change.from, change.to)) == change.faults);
  }
}

TEST_CASE("a half turn is a fault only where the file alone shows one") {
  const std::string from = R"(300 20" roll-pitch-yaw="180 0 0")";
  const auto turned = [&](const std::string& degrees) {
    return test::changed(sound, from, "300 20\" roll-pitch-yaw=\"" + degrees + " 0 0\"");
  };
  CHECK(faults_of(turned("0.00001")) == "");
  CHECK(faults_of(turned("-0.00001")) == "");
  CHECK(faults_of(turned("0.0000001")) != "");
  CHECK(faults_of(turned("360")) != "");
  CHECK(faults_of(test::changed(turned("0"), R"(speed="120")", R"(speed="120" orientation="axis")")) == "");
  CHECK(faults_of(test::changed(turned("0"), "id=\"C\"", "id=\"C\" orientation=\"free\"")) == "");
  CHECK(faults_of(test::changed(turned("0"), "id=\"C\"", "id=\"C\" frame=\"g\"")) == "");
  CHECK(faults_of(test::changed(turned("0"), "id=\"C\"", "id=\"C\" tool=\"u\"")) == "");
}

TEST_CASE("an arc is judged only where its three points are in one frame, of one tool") {
  const std::string line = test::changed(sound, "60 360 20", "60 300 20");
  CHECK(faults_of(line) != "");
  CHECK(faults_of(test::changed(line, "id=\"D\"", "id=\"D\" frame=\"g\"")) == "");
  CHECK(faults_of(test::changed(line, "id=\"D\"", "id=\"D\" tool=\"u\"")) == "");
  CHECK(faults_of(test::changed(sound, "60 360 20", "60 300.00001 20")) == "");
}

TEST_CASE("a path needs two waypoints") {
  CHECK(faults_of("<path version='1' cell='c'/>") == "1:1: <path> has 0 waypoints; expected two at least");
  CHECK(faults_of("<path version='1' cell='c'>\n<waypoint id='A'><joints>0 0</joints></waypoint></path>") ==
        "1:1: <path> has 1 waypoint; expected two at least");
  CHECK(faults_of("<cell version='1'/>") == "1:1: the root element is <cell>; expected <path>");
}

}  // namespace
}  // namespace pathvet
