#include <doctest/doctest.h>

#include <cmath>
#include <limits>

#include "broken_inputs.hpp"
#include "pathvet/model/units.hpp"
#include "pathvet/xml/read.hpp"

namespace pathvet {
namespace {

using test::Change;

const std::string sound = R"(<cell version="1" name="housing cell">
  <arm name="two joints">
    <base position="1 2 3" roll-pitch-yaw="0 0 90"/>
    <joint name="J1" type="revolute" lower="-170" upper="170" speed="180" acceleration="500">
      <dh theta="0" d="400" a="300" alpha="90"/>
    </joint>
    <joint name="J2" type="prismatic" lower="0" upper="500" speed="800">
      <dh-proximal alpha="0" a="0" theta="0" d="0"/>
    </joint>
    <flange position="0 0 12"/>
    <combined-limit name="sum" lower="-60" upper="240" speed="90"><term joint="J1" factor="2"/></combined-limit>
  </arm>
  <tool name="t" position="0 0 180"/>
  <positioner name="p">
    <joint name="T" type="revolute" continuous="true" speed="60"><mount axis="0 0 1"/></joint>
    <flange position="0 0 50"/>
  </positioner>
  <frame name="f" position="10 20 30" carried-by="p"/>
  <home joints="10 20"/>
</cell>
)";

std::string faults_of(const std::string& text) {
  return test::listed(parse_cell(text, "cell.xml").faults);
}

Cell cell_of(const std::string& text) {
  const Reading<Cell> reading = parse_cell(text, "cells/a.xml");
  REQUIRE_MESSAGE(reading.value, test::listed(reading.faults));
  CHECK(reading.faults.empty());
  return *reading.value;
}

TEST_CASE("a sound cell is read whole") {
  const Cell cell = cell_of(sound);
  CHECK(cell.file == "cells/a.xml");
  CHECK(cell.name == "housing cell");
  CHECK(cell.arm.name == "two joints");
  CHECK(cell.arm.base.position == Vector3(1, 2, 3));
  CHECK((cell.arm.base.rotation * Vector3::UnitX() - Vector3::UnitY()).norm() == 0);
  CHECK(cell.arm.flange.position == Vector3(0, 0, 12));
  REQUIRE(cell.arm.joint_count() == 2);
  CHECK(cell.arm.joints[0].name == "J1");
  CHECK(cell.arm.joints[1].type == JointType::prismatic);
  CHECK_FALSE(cell.arm.joints[1].acceleration);
  REQUIRE(cell.tools.size() == 1);
  CHECK(cell.tools[0].name == "t");
  CHECK(cell.tools[0].placement.position.z() == 180);
  REQUIRE(cell.home);
  CHECK((*cell.home)[0] == doctest::Approx(pi / 18));
  CHECK((*cell.home)[1] == 20);
}

TEST_CASE("a combined limit is in the units of its joints") {
  const CombinedLimit limit = cell_of(sound).arm.combined_limits.at(0);
  CHECK(limit.name == "sum");
  CHECK(limit.type == JointType::revolute);
  REQUIRE(limit.terms.size() == 1);
  CHECK(limit.terms[0].joint == 0);
  CHECK(limit.terms[0].factor == 2);
  CHECK(limit.lower.value() == doctest::Approx(-pi / 3));
  CHECK(limit.upper.value() == doctest::Approx(4 * pi / 3));
  CHECK(limit.speed.value() == doctest::Approx(pi / 2));
  const CombinedLimit along =
      cell_of(test::changed(sound, "<term joint=\"J1\"", "<term joint=\"J2\"")).arm.combined_limits.at(0);
  CHECK(along.type == JointType::prismatic);
  CHECK(along.lower.value() == -60);
  CHECK(along.speed.value() == 90);
}

TEST_CASE("positioners carry frames, whichever is written first") {
  const Cell cell = cell_of(sound);
  REQUIRE(cell.positioners.size() == 1);
  CHECK(cell.positioners[0].flange.position.z() == 50);
  CHECK(cell.frames.at(0).carried_by == 0);
  CHECK(cell.frames[0].placement.position == Vector3(10, 20, 30));
  const Joint& joint = cell.positioners[0].joints.at(0);
  CHECK(joint.continuous);
  CHECK(joint.lower == -std::numeric_limits<double>::infinity());
  CHECK(joint.upper == std::numeric_limits<double>::infinity());
  const Cell before =
      cell_of(test::changed(sound, "<tool", "<frame name=\"g\" carried-by=\"p\"/><frame name=\"h\"/><tool"));
  CHECK(before.frames.at(0).carried_by == 0);
  CHECK_FALSE(before.frames.at(1).carried_by);
}

TEST_CASE("the characteristic length is half the sum of the links, or what is given") {
  // 500 for the first row, 500 for the greatest d of the second, 12 for the flange
  CHECK(cell_of(sound).arm.characteristic_length == doctest::Approx(506));
  const std::string given =
      test::changed(sound, "<arm name=\"two joints\"", "<arm characteristic-length=\"812.5\"");
  CHECK(cell_of(given).arm.characteristic_length == 812.5);
  CHECK(cell_of(given).arm.name == "");
}

TEST_CASE("an arm without lengths asks for the attribute") {
  const std::string text =
      "<cell version='1'><arm>\n<joint name='J' type='revolute' lower='0' upper='1' speed='1'>"
      "<mount axis='0 0 1'/></joint></arm></cell>";
  CHECK(faults_of(text) ==
        "1:19: no link of <arm> has a length; expected the attribute characteristic-length (mm)");
  CHECK(faults_of(test::changed(text, "<arm>", "<arm characteristic-length='1'>")) == "");
}

TEST_CASE("sixteen joints are read, a seventeenth is a fault") {
  std::string joints;
  for (int i = 1; i <= 16; ++i) {
    joints +=
        "<joint name='" + std::to_string(i) +
        "' type='revolute' lower='0' upper='1' speed='1'><mount position='1 0 0' axis='0 0 1'/></joint>\n";
  }
  const std::string begin = "<cell version='1'><arm>\n";
  CHECK(faults_of(begin + joints + "</arm></cell>") == "");
  CHECK(faults_of(begin + joints + "<joint/></arm></cell>") ==
        "18:1: joint 17 of <arm>; expected at most 16");
}

TEST_CASE("each fault of a cell stands at its place") {
  const std::string joint1 = R"(lower="-170" upper="170" speed="180" acceleration="500")";
  const std::string dh = R"(<dh theta="0" d="400" a="300" alpha="90"/>)";
  const std::string limit = R"(lower="-60" upper="240" speed="90">)";
  const std::string term = R"(<term joint="J1" factor="2"/>)";
  const std::vector<Change> changes{
      // the root
      {"version=\"1\" ", "", "1:1: <cell> has no attribute \"version\""},
      {"version=\"1\"", "version=\"1.0\"", "1:7: version \"1.0\" of <cell>; expected \"1\""},
      {"name=\"housing cell\"", "nmae=\"\"",
       "1:19: unknown attribute \"nmae\" of <cell>; expected version or name"},
      {"<tool", "x <tool", "13:3: text in <cell>, where none belongs"},
      {"<tool name", "<Tool name",
       "13:3: unknown element <Tool> in <cell>; expected arm, tool, frame, positioner or home"},
      {"<tool ", "<home joints=\"1 2\"/>\n<tool ", "20:3: a second <home> in <cell>; expected one"},
      {"</arm>", "</arm><arm/>", "12:9: a second <arm> in <cell>; expected one"},
      // names
      {"<tool name=\"t\"", "<tool", "13:3: <tool> has no attribute \"name\""},
      {"<tool name=\"t\"", "<tool name=\" \"",
       "13:9: name of <tool> is \" \"; expected a name, on one line and not empty"},
      {"<tool name=\"t\"", "<tool name=\"t&#10;u\"",
       "13:9: name of <tool> is \"t\\x0au\"; expected a name, on one line and not empty"},
      {"<tool", "<tool name=\"t\"/><tool", "13:25: the name \"t\" is taken by another tool"},
      {"\"J2\"", "\"J1\"", "7:12: the name \"J1\" is taken by another joint"},
      {"\"sum\"", "\"J2\"", "11:21: the name \"J2\" is taken by another joint or combined limit"},
      // joints
      {"type=\"revolute\" lower", "type=\"Revolute\" lower",
       "4:22: type \"Revolute\" of <joint>; expected \"revolute\" or \"prismatic\""},
      {"type=\"prismatic\" ", "", "7:5: <joint> has no attribute \"type\""},
      {joint1, "",
       "4:5: <joint> has no attribute \"lower\"\n4:5: <joint> has no attribute \"upper\"\n"
       "4:5: <joint> has no attribute \"speed\""},
      {joint1, R"(lower="170" upper="170" speed="180")", "4:38: lower 170 of <joint> is not below upper 170"},
      {joint1, R"(lower="a" upper="170" speed="0")",
       "4:38: lower of <joint>: \"a\" is not a number\n4:60: speed of <joint>: \"0\" is not above 0"},
      {joint1, R"(lower="-170" upper="1e999" speed="180" acceleration="-1")",
       "4:51: upper of <joint>: \"1e999\" is out of the range of double precision\n"
       "4:77: acceleration of <joint>: \"-1\" is not above 0"},
      {joint1, R"(continuous="true" lower="0" speed="180")",
       "4:56: lower of a continuous joint; expected neither lower nor upper"},
      {joint1, R"(continuous="yes" lower="0" upper="1" speed="180")",
       "4:38: continuous=\"yes\" of <joint>; expected \"true\" or \"false\""},
      {joint1, R"(continuous="false" speed="180" upper="1")", "4:5: <joint> has no attribute \"lower\""},
      {"lower=\"0\" upper=\"500\"", "continuous=\"true\"",
       "7:39: a prismatic joint cannot be continuous; expected lower and upper"},
      // links
      {dh, "", "4:5: <joint> has no link; expected one of <dh>, <dh-proximal> or <mount>"},
      {dh, dh + "<mount axis=\"1 0 0\"/>",
       "5:49: a second link of one joint; expected one of <dh>, <dh-proximal> or <mount>"},
      {dh, dh + dh, "5:49: a second link of one joint; expected one of <dh>, <dh-proximal> or <mount>"},
      {dh, R"(<dh theta="0" d="400" alpha="90"/>)", "5:7: <dh> has no attribute \"a\""},
      {dh, R"(<dh theta="0" d="4OO" a="300" alpha="90"/>)", "5:21: d of <dh>: \"4OO\" is not a number"},
      {dh, R"(<dh theta="0" d="4" r="300" a="1" alpha="90"/>)",
       "5:27: unknown attribute \"r\" of <dh>; expected theta, d, a or alpha"},
      {dh, R"(<mount/>)", "5:7: <mount> has no attribute \"axis\""},
      {dh, R"(<mount axis="0 0 0"/>)", "5:14: axis of <mount> is zero; expected a direction"},
      {dh, R"(<mount axis="0 1"/>)", "5:14: axis of <mount>: 2 numbers; expected 3"},
      {dh, "<urdf/>",
       "4:5: <joint> has no link; expected one of <dh>, <dh-proximal> or <mount>\n"
       "5:7: unknown element <urdf> in <joint>; expected dh, dh-proximal or mount"},
      // combined limits
      {limit, R"(lower="-60" speed="90">)",
       "11:32: <combined-limit> has one of lower and upper alone; expected both or neither"},
      {limit, R"(upper="240">)",
       "11:32: <combined-limit> has one of lower and upper alone; expected both or neither"},
      {limit, ">", "11:5: <combined-limit> bounds nothing; expected lower and upper, speed, or all three"},
      {limit, R"(lower="60" upper="-60">)", "11:32: lower 60 of <combined-limit> is not below upper -60"},
      {term, "", "11:5: <combined-limit> has no <term>; expected one at least"},
      {term, R"(<term joint="J9" factor="2"/>)",
       "11:73: no joint \"J9\" in the arm; expected \"J1\" or \"J2\""},
      {term, R"(<term joint="J1" factor="0"/>)", "11:84: factor of <term> is 0; expected another number"},
      {term, R"(<term joint="J1"/>)", "11:67: <term> has no attribute \"factor\""},
      {term, term + term, "11:102: a second <term> of the joint \"J1\"; expected one"},
      {term, term + R"(<term joint="J2" factor="1"/>)",
       "11:102: the joint \"J2\" is prismatic; expected a revolute one like the first"},
      // placements, tools, frames, positioners, home
      {"<flange position=\"0 0 12\"/>", "<flange position=\"0 0 12\">x</flange>",
       "10:31: text in <flange>, where none belongs"},
      {"<flange position=\"0 0 12\"/>", "<flange position=\"0 0\"/><flange/>",
       "10:13: position of <flange>: 2 numbers; expected 3\n10:29: a second <flange> in <arm>; expected one"},
      {"<arm name=\"two joints\">", "<arm characteristic-length=\"0\">",
       "2:8: characteristic-length of <arm>: \"0\" is not above 0"},
      {"carried-by=\"p\"", "carried-by=\"q\"", "18:39: no positioner \"q\" in the cell; expected \"p\""},
      {"<tool name=\"t\"", "<tool name=\"t\" carried-by=\"p\"",
       "13:18: a tool that a positioner carries is not supported; expected carried-by at a <frame>"},
      {"joints=\"10 20\"", "", "19:3: <home> has no attribute \"joints\""},
      {"joints=\"10 20\"", "joints=\"10 20 30\"", "19:9: joints of <home>: 3 numbers; expected 2"},
      {"joints=\"10 20\"", "joints=\"10 x\"", "19:9: joints of <home>: \"x\" is not a number"},
  };
  REQUIRE(faults_of(sound) == "");
  for (const Change& change : changes) {
    CAPTURE(change.from);
    CAPTURE(change.to);
    CHECK(faults_of(test::changed(sound, change.from, change.to)) == change.faults);
  }
}

TEST_CASE("a cell needs an arm, an arm and a positioner joints") {
  CHECK(faults_of("<cell version='1'/>") == "1:1: <cell> has no <arm>; expected one");
  CHECK(faults_of("<cell version='1'><arm characteristic-length='1'/></cell>") ==
        "1:19: <arm> has no <joint>; expected 1 to 16");
  CHECK(faults_of(test::changed(sound, "<tool", "<positioner name='q'/><tool")) ==
        "13:3: <positioner> has no <joint>; expected 1 to 16");
  CHECK(faults_of("\n<path version='1'/>") == "2:1: the root element is <path>; expected <cell>");
}

TEST_CASE("faults of all parts are collected, in the order of their places") {
  std::string text = test::changed(sound, "joints=\"10 20\"", "joints=\"\"");
  text = test::changed(text, "speed=\"60\"", "speed=\"fast\"");
  text = test::changed(text, "position=\"1 2 3\"", "position=\"1 2\"");
  CHECK(faults_of(text) ==
        "3:11: position of <base>: 2 numbers; expected 3\n15:55: speed of <joint>: \"fast\" is not a number\n"
        "19:9: joints of <home>: 0 numbers; expected 2");
}

}  // namespace
}  // namespace pathvet
