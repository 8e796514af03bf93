#include <cmath>
#include <filesystem>
#include <limits>

#include <doctest/doctest.h>

#include "pathvet/model/units.hpp"
#include "pathvet/xml/read.hpp"
#include "pathvet/xml/rewrite.hpp"
#include "support/seed.hpp"

namespace pathvet {
namespace {

const std::string path_text =
    "<?xml version=\"1.0\"?>\r\n"
    "<path version=\"1\" cell='c.xml' speed=\"10\">\r\n"
    "  <waypoint id=\"A\"><joints>0</joints></waypoint>\r\n"
    "  <!-- id=\"B\" speed=\"3\" is not an attribute -->\r\n"
    "\t<waypoint\r\n\t  id='B>' move =\t\"circular\"   tool=\"t &amp; u\" blend=\"5\" ><via position=\"1 2 "
    "3\"/>"
    "<pose roll-pitch-yaw='180 0  90' position=\"4 5 6\"/></waypoint>\r\n"
    "</path>";

TEST_CASE("without edits the text comes out byte by byte, a byte order mark too") {
  CHECK(PathRewriter(path_text).text() == path_text);
  CHECK(PathRewriter("\xEF\xBB\xBF" + path_text).text() == "\xEF\xBB\xBF" + path_text);
}

TEST_CASE("attributes are changed where they stand, and added behind the others") {
  PathRewriter rewriter(path_text);
  CHECK(rewriter.attribute(-1, "cell") == "c.xml");
  CHECK(rewriter.attribute(1, "tool") == "t &amp; u");
  CHECK(!rewriter.attribute(1, "speed"));
  rewriter.set_attribute(1, "speed", "7.5");
  rewriter.set_attribute(1, "blend", "0");
  rewriter.set_attribute(-1, "cell", "../d.xml");
  rewriter.set_via(1, {1.5, 0, -2});
  std::string expected = path_text;
  expected.replace(expected.find("'c.xml'"), 7, "'../d.xml'");
  expected.replace(expected.find("blend=\"5\""), 9, "blend=\"0\" speed=\"7.5\"");
  expected.replace(expected.find("1 2 3"), 5, "1.5 0 -2");
  CHECK(rewriter.text() == expected);
}

TEST_CASE(
    "a waypoint comes in on a line of its own, with what it takes over and the line ends that are there") {
  PathRewriter rewriter(path_text);
  PathRewriter::Insertion insertion;
  insertion.suffix = ".1";
  insertion.attributes = {{"speed", "2"}, {"blend", "0"}};
  insertion.pose.position = {1, 2, 3};
  insertion.same_orientation = true;
  insertion.via = Vector3(0.5, 1, 1.5);
  rewriter.insert_before(1, insertion, Cell{});
  insertion.suffix = ".2";
  insertion.same_orientation = false;
  insertion.pose.rotation = rotation_from_roll_pitch_yaw(pi, 0, 30 * radians_per_degree);
  rewriter.insert_before(1, insertion, Cell{});
  const std::string line =
      "\t<waypoint id='B>.1' move=\"circular\" tool=\"t &amp; u\" blend=\"0\" speed=\"2\"> <via "
      "position=\"0.5 1 1.5\"/> "
      "<pose position=\"1 2 3\" roll-pitch-yaw='180 0  90'/> </waypoint>\r\n";
  const std::string text = rewriter.text();
  const std::size_t at = text.find("\t<waypoint");
  CHECK(text.substr(at, line.size()) == line);
  CHECK(text.find("id='B>.2'", at) < text.find("id='B>'", at));
  const std::size_t second = text.find("roll-pitch-yaw=\"", at);
  CHECK(text.substr(second, 40).rfind("roll-pitch-yaw=\"180 0 30\"", 0) == 0);
}

TEST_CASE("a waypoint that doesn't begin its line gets the new one before it") {
  const std::string text =
      "<path version=\"1\" cell=\"c\"><waypoint id=\"A\"/> <waypoint id=\"B\" "
      "move=\"linear\"><pose/></waypoint></path>";
  PathRewriter rewriter(text);
  PathRewriter::Insertion insertion;
  insertion.suffix = ".1";
  rewriter.insert_before(1, insertion, Cell{});
  std::string expected = text;
  expected.insert(
      expected.find("<waypoint id=\"B\""),
      "<waypoint id=\"B.1\" move=\"linear\"> <pose position=\"0 0 0\" quaternion=\"1 0 0 0\"/> </waypoint> ");
  CHECK(rewriter.text() == expected);
}

TEST_CASE("orientations come back from every spelling") {
  test::Random random("rewritten orientations");
  Reading<Cell> cell = parse_cell(
      "<cell version=\"1\" name=\"c\"><arm name=\"a\" characteristic-length=\"1\"><joint name=\"J\" "
      "type=\"revolute\" lower=\"-9\" "
      "upper=\"9\" speed=\"1\"><mount axis=\"0 0 1\"/></joint></arm></cell>",
      "cell");
  REQUIRE(cell.value.has_value());
  for (int run = 0; run < 300; ++run) {
    const char* spelling = run % 3 == 0   ? "roll-pitch-yaw=\"0 0 0\""
                           : run % 3 == 1 ? "rotation-vector=\"0 0 0\""
                                          : "quaternion=\"1 0 0 0\"";
    const std::string text =
        std::string(
            "<path version=\"1\" cell=\"c\" speed=\"1\"><waypoint id=\"A\"><joints>0</joints></waypoint>"
            "<waypoint id=\"B\" move=\"linear\"><pose ") +
        spelling + "/></waypoint></path>";
    PathRewriter rewriter(text);
    PathRewriter::Insertion insertion;
    insertion.suffix = ".1";
    const Vector3 axis = Vector3(random.normal(), random.normal(), random.normal()).normalized();
    insertion.pose.rotation = rotation_from_vector(random.uniform(0, pi) * axis);
    if (run % 7 == 0)
      insertion.pose.rotation = rotation_from_roll_pitch_yaw(1, pi / 2, 0.3);  // no roll of its own
    insertion.pose.position = 1000 * axis;
    rewriter.insert_before(1, insertion, *cell.value);
    const Reading<Path> path = parse_path(rewriter.text(), "p", *cell.value);
    for (const Fault& fault : path.faults) FAIL_CHECK(to_string(fault));
    if (!path.value || path.value->waypoints.size() != 3) continue;
    CHECK((path.value->waypoints[1].pose->rotation - insertion.pose.rotation).norm() < 1e-13);
    CHECK((path.value->waypoints[1].pose->position - insertion.pose.position).norm() < 1e-11);
  }
}

TEST_CASE("speeds are cut to six digits, never rounded up") {
  CHECK(file_number_below(83.7758040957) == "83.7758");
  CHECK(file_number_below(99.99999999) == "99.9999");
  CHECK(file_number_below(120) == "120");
  CHECK(file_number_below(0.1) == "0.1");
  test::Random random("speeds cut");
  for (int run = 0; run < 10000; ++run) {
    const double value = std::pow(10, random.uniform(-6, 6));
    const double read = std::stod(file_number_below(value));
    CHECK(read <= value);
    CHECK(read > value * (1 - 1.1e-5));
  }
}

}  // namespace
}  // namespace pathvet
