#include <fmt/format.h>

#include <array>
#include <boost/program_options/value_semantic.hpp>
#include <cmath>
#include <sstream>

#include "commands/outputs.hpp"
#include "commands/pose.hpp"
#include "pathvet/model/units.hpp"

namespace pathvet::commands {
namespace {

namespace po = boost::program_options;

constexpr double quaternion_norm_tolerance = 1e-3;  // as for a quaternion in a file

po::options_description pose_options() {
  const auto value = [](const char* shown) { return po::value<std::string>()->value_name(shown); };
  po::options_description question("What is asked");
  question.add_options()                                                                               //
      ("cell", value("FILE"), "the cell")                                                              //
      ("tool", value("NAME"), "the tool whose TCP is meant (default: the bare flange)")                //
      ("frame", value("NAME"), "the frame that poses are in (default: the world)")                     //
      ("joints", value("\"Q1 Q2 ...\""), "a configuration (deg, mm): shows the pose and its figures")  //
      ("position", value("\"X Y Z\""), "a pose (mm): lists every configuration that reaches it")       //
      ("quaternion", value("\"W X Y Z\""), "orientation of the pose, in one of three ways")            //
      ("roll-pitch-yaw", value("\"R P Y\""), "about fixed axes x, y, z (deg)")                         //
      ("rotation-vector", value("\"X Y Z\""), "axis times angle (deg)")                                //
      ("orientation", value("WHAT"), "what of the orientation binds: full (default), axis, free");
  po::options_description answer("What is shown");
  answer.add_options()                                                                  //
      ("beyond-limits", "list the configurations outside the limits too")               //
      ("turns", "list every whole-turn variant inside the limits, not the middle one")  //
      ("json", value("FILE"), "write the answer as JSON (- is standard output)");
  po::options_description all;
  all.add(question).add(answer).add(common_options());
  return all;
}

/// The rotation that at most one of three options gives; identity without any.
Matrix3 read_rotation(OptionValues& values) {
  int given = 0;
  for (const char* name : {"quaternion", "roll-pitch-yaw", "rotation-vector"})
    given += values.has(name) ? 1 : 0;
  if (given > 1)
    values.problem("give the orientation in one way: --quaternion, --roll-pitch-yaw or --rotation-vector");
  Matrix3 rotation = Matrix3::Identity();
  if (const auto q = values.numbers("quaternion", 4)) {
    const Eigen::Quaterniond read((*q)[0], (*q)[1], (*q)[2], (*q)[3]);
    if (!(std::abs(read.norm() - 1) <= quaternion_norm_tolerance)) {
      values.problem(fmt::format("--quaternion has the norm {:.6g}; expected 1", read.norm()));
    } else {
      rotation = read.normalized().toRotationMatrix();
    }
  }
  if (const auto a = values.numbers("roll-pitch-yaw", 3)) {
    rotation = rotation_from_roll_pitch_yaw((*a)[0] * radians_per_degree, (*a)[1] * radians_per_degree,
                                            (*a)[2] * radians_per_degree);
  }
  if (const auto v = values.numbers("rotation-vector", 3)) {
    rotation = rotation_from_vector(Vector3((*v)[0], (*v)[1], (*v)[2]) * radians_per_degree);
  }
  return rotation;
}

Orientation read_orientation(OptionValues& values) {
  const std::string word = values.text("orientation").value_or("full");
  if (word == "full") return Orientation::full;
  if (word == "axis") return Orientation::axis;
  if (word == "free") return Orientation::free;
  values.problem(fmt::format("--orientation must be full, axis or free, not '{}'", word));
  return Orientation::full;
}

void read_question(OptionValues& values, PoseSettings& settings) {
  const bool has_joints = values.has("joints");
  const bool has_position = values.has("position");
  if (has_joints && has_position)
    values.problem("--joints and --position are two questions; ask one at a time");
  if (!has_joints && !has_position) values.problem("nothing is asked: give --joints or --position");
  settings.joints = values.numbers("joints", 0);
  const Matrix3 rotation = read_rotation(values);
  if (const auto p = values.numbers("position", 3))
    settings.asked = Pose{rotation, {(*p)[0], (*p)[1], (*p)[2]}};
  settings.orientation = read_orientation(values);
  if (has_position) return;
  for (const char* name :
       {"quaternion", "roll-pitch-yaw", "rotation-vector", "orientation", "beyond-limits", "turns"}) {
    if (values.has(name)) values.problem(fmt::format("--{} goes with --position", name));
  }
}

}  // namespace

std::vector<OutputRequest> PoseSettings::outputs() const {
  return json ? std::vector<OutputRequest>{*json} : std::vector<OutputRequest>();
}

std::string pose_help() {
  std::ostringstream text;
  text << "Usage: pathvet pose --cell FILE (--joints \"...\" | --position \"...\") [options]\n\n"
          "With joints: the pose that they lead to, singular values, branch and distances to the limits.\n"
          "With a position: every configuration that reaches the pose, one row each.\n"
          "Numbers in a list are separated by spaces or commas.\n"
       << pose_options();
  return text.str();
}

Setup<PoseSettings> setup_pose(const Arguments& arguments) {
  OptionValues values(arguments, pose_options());
  Setup<PoseSettings> setup;
  PoseSettings& settings = setup.settings;
  setup.wants_help = values.has("help");
  settings.cell = values.text("cell").value_or("");
  if (settings.cell.empty()) values.problem("--cell is missing");
  settings.tool = values.text("tool");
  settings.frame = values.text("frame");
  read_question(values, settings);
  settings.beyond_limits = values.has("beyond-limits");
  settings.turns = values.has("turns");
  settings.json = read_output(values, "json");
  settings.log_level = read_log_level(values);
  for (const std::string& word : values.positional()) {
    values.problem(fmt::format("'{}' belongs to no option (a list of numbers needs quotes)", word));
  }
  setup.problems = values.problems();
  return setup;
}

std::vector<std::string> file_problems(const PoseSettings& settings) {
  std::vector<std::string> problems = output_problems(settings.outputs(), {settings.cell});
  const std::vector<std::string> unreadable = input_problems({settings.cell});
  problems.insert(problems.end(), unreadable.begin(), unreadable.end());
  return problems;
}

}  // namespace pathvet::commands
