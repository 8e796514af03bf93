#include <doctest/doctest.h>

#include <cmath>
#include <string>

#include "commands/pose.hpp"
#include "pathvet/model/units.hpp"

using namespace pathvet;
using namespace pathvet::commands;

TEST_CASE("a configuration as the question") {
  const auto setup =
      setup_pose({"--cell", "c.xml", "--tool", "pin", "--frame", "table", "--joints", "-10, 20 30"});
  CHECK(setup.problems.empty());
  CHECK(setup.settings.cell == "c.xml");
  CHECK(setup.settings.tool == "pin");
  CHECK(setup.settings.frame == "table");
  CHECK(setup.settings.joints.value() == std::vector<double>{-10, 20, 30});
  CHECK(!setup.settings.asked);
}

TEST_CASE("a pose as the question, its orientation in each way") {
  const double half = std::sqrt(0.5);
  const Matrix3 quarter = rotation_from_roll_pitch_yaw(0, 0, pi / 2);
  const Arguments base = {"--cell", "c.xml", "--position", "1 -2 3"};
  struct Row {
    std::string option, value;
  };
  const Row rows[] = {{"--quaternion", std::to_string(half) + " 0 0 " + std::to_string(half)},
                      {"--roll-pitch-yaw", "0 0 90"},
                      {"--rotation-vector", "0 0 90"}};
  for (const Row& row : rows) {
    Arguments arguments = base;
    arguments.insert(arguments.end(), {row.option, row.value});
    const auto setup = setup_pose(arguments);
    CHECK(setup.problems.empty());
    REQUIRE(setup.settings.asked);
    CHECK(setup.settings.asked->position == Vector3(1, -2, 3));
    CHECK((setup.settings.asked->rotation - quarter).cwiseAbs().maxCoeff() < 1e-6);
  }
  const auto plain = setup_pose(base);
  REQUIRE(plain.settings.asked);
  CHECK(plain.settings.asked->rotation == Matrix3::Identity());
}

TEST_CASE("what is shown") {
  const auto setup = setup_pose({"--cell", "c", "--position", "0 0 0", "--orientation", "axis",
                                 "--beyond-limits", "--turns", "--json", "-"});
  CHECK(setup.problems.empty());
  CHECK(setup.settings.orientation == Orientation::axis);
  CHECK(setup.settings.beyond_limits);
  CHECK(setup.settings.turns);
  CHECK(setup.settings.json.value().target == "-");
}

TEST_CASE("each bad combination of a pose call has its one problem") {
  struct Row {
    Arguments arguments;
    const char* problem;
  };
  const Row rows[] = {
      {{"--joints", "1"}, "--cell is missing"},
      {{"--cell", "c"}, "nothing is asked: give --joints or --position"},
      {{"--cell", "c", "--joints", "1", "--position", "1 2 3"},
       "--joints and --position are two questions; ask one at a time"},
      {{"--cell", "c", "--position", "1 2"}, "--position must be 3 numbers, not '1 2'"},
      {{"--cell", "c", "--joints", "a"}, "--joints: 'a' is not a number"},
      {{"--cell", "c", "--joints", " "}, "--joints must be at least one number, not ' '"},
      {{"--cell", "c", "--position", "1 2 3", "--quaternion", "1 0.1 0 0"},
       "--quaternion has the norm 1.00499; expected 1"},
      {{"--cell", "c", "--position", "1 2 3", "--quaternion", "1 0 0 0", "--roll-pitch-yaw", "0 0 0"},
       "give the orientation in one way: --quaternion, --roll-pitch-yaw or --rotation-vector"},
      {{"--cell", "c", "--position", "1 2 3", "--orientation", "all"},
       "--orientation must be full, axis or free, not 'all'"},
      {{"--cell", "c", "--joints", "1", "--turns"}, "--turns goes with --position"},
      {{"--cell", "c", "--joints", "1", "--roll-pitch-yaw", "0 0 0"},
       "--roll-pitch-yaw goes with --position"},
      {{"--cell", "c", "--joints", "1", "2"}, "'2' belongs to no option (a list of numbers needs quotes)"},
  };
  for (const Row& row : rows) {
    CHECK(setup_pose(row.arguments).problems == std::vector<std::string>{row.problem});
  }
}

TEST_CASE("the help of pose names every option") {
  const std::string help = pose_help();
  for (const char* option : {"--cell", "--tool", "--frame", "--joints", "--position", "--quaternion",
                             "--roll-pitch-yaw", "--rotation-vector", "--orientation", "--beyond-limits",
                             "--turns", "--json", "--log-level", "--help"}) {
    CHECK_MESSAGE(help.find(option) != std::string::npos, option);
  }
}
