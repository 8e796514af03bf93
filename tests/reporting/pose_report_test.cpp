#include "pathvet/reporting/pose_report.hpp"

#include <doctest/doctest.h>

#include <nlohmann/json.hpp>
#include <sstream>

#include "pathvet/reporting/caution.hpp"
#include "reporting/sample_result.hpp"

using namespace pathvet;
using Json = nlohmann::ordered_json;

namespace {

ConfigurationReport configuration() {
  ConfigurationReport one;
  one.joints = (JointVector(2) << sample::deg(-12.5), 250).finished();
  one.pose.position = {100, -20.25, 3};
  one.pose.rotation = rotation_from_roll_pitch_yaw(0, 0, sample::deg(90));
  one.branch = std::string("-");
  one.singular_values = {2, 0.25};
  one.determinant = -0.5;
  one.margins = {sample::deg(30), 50};
  return one;
}

PoseReport report() {
  PoseReport report;
  report.cell_file = "cell.xml";
  report.cell = "small cell";
  report.arm = "turn and slide";
  report.tool = "pin";
  report.joint_names = {"J1", "S2"};
  report.joint_types = {JointType::revolute, JointType::prismatic};
  report.characteristic_length = 400;
  report.configurations = {configuration()};
  return report;
}

std::string text_of(const PoseReport& asked) {
  std::ostringstream out;
  write_pose_text(asked, out, {80, false, false});
  return out.str();
}

Json json_of(const PoseReport& asked) {
  std::ostringstream out;
  write_pose_json(asked, out);
  return Json::parse(out.str());
}

}  // namespace

TEST_CASE("the pose of a configuration as text") {
  const std::string text = text_of(report());
  CHECK(text.substr(0, text.find("Caution")) ==
        "TCP of tool pin in the world; cell small cell (cell.xml), arm: turn and slide\n"
        "\n"
        "joints                   J1 -12.5, S2 250\n"
        "position                 100 -20.25 3 mm\n"
        "quaternion               0.7071068 0 0 0.7071068 (w x y z)\n"
        "roll-pitch-yaw           0 0 90 deg\n"
        "branch                   - (sign of the determinant)\n"
        "smallest singular value  0.25\n"
        "singular values          2, 0.25 (lengths over 400 mm)\n"
        "manipulability           0.5; determinant -0.5\n"
        "to the limits            J1 30 deg, S2 50 mm\n"
        "\n");
  CHECK(text.find("pathvet looks at kinematics alone") != std::string::npos);
}

TEST_CASE("the pose of a configuration as JSON") {
  const Json read = json_of(report());
  CHECK(read["position"] == Json({100, -20.25, 3}));
  CHECK(read["quaternion"].size() == 4);
  CHECK(read["quaternion"][0].get<double>() == doctest::Approx(std::sqrt(0.5)));
  CHECK(read["branch"] == "-");
  CHECK(read["min_singular_value"] == 0.25);
  CHECK(read["joints"] == Json({-12.5, 250}));
  CHECK(read["limit_margins"] == Json({30, 50}));
  CHECK(read["caution"] == caution());
  auto member = read.begin();
  for (const char* name : {"position", "quaternion", "branch", "min_singular_value"}) {
    CHECK(member.key() == name);
    ++member;
  }
}

TEST_CASE("the configurations of a pose") {
  PoseReport asked = report();
  asked.asked = Pose{};
  asked.outside_limits = 2;
  asked.configurations.push_back(configuration());
  asked.configurations[1].inside_limits = false;
  asked.configurations[1].margins[0] = sample::deg(-5);
  const std::string text = text_of(asked);
  CHECK(text.find("2 configurations; 2 more beyond the limits\n"
                  "#  J1 S2      branch  sing. v.  nearest limit\n"
                  "-  ---------  ------  --------  -----------------\n"
                  "1  -12.5 250  -       0.25      J1 30 deg\n"
                  "2  -12.5 250  -       0.25      BEYOND, J1 -5 deg\n") != std::string::npos);
  const Json read = json_of(asked);
  CHECK(read.begin().key() == "solutions");
  REQUIRE(read["solutions"].size() == 2);
  CHECK(read["solutions"][0]["joints"] == Json({-12.5, 250}));
  CHECK(read["solutions"][0]["inside_limits"] == true);
  CHECK(read["solutions"][1]["inside_limits"] == false);
  CHECK(read["outside_limits"] == 2);
}

TEST_CASE("a pose without any configuration") {
  PoseReport asked = report();
  asked.asked = Pose{};
  asked.configurations.clear();
  CHECK(text_of(asked).find("\n0 configurations\n") != std::string::npos);
  CHECK(json_of(asked)["solutions"] == Json::array());
}
