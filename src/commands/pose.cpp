#include "commands/pose.hpp"

#include <fmt/format.h>
#include <spdlog/spdlog.h>

#include <algorithm>

#include "commands/errors.hpp"
#include "commands/log.hpp"
#include "commands/outputs.hpp"
#include "commands/pose_figures.hpp"
#include "commands/terminal.hpp"
#include "pathvet/kinematics/configurations.hpp"
#include "pathvet/model/units.hpp"
#include "pathvet/xml/read.hpp"

namespace pathvet::commands {
namespace {

/// What the settings mean in this cell.
struct Question {
  Pose tool;
  Pose frame;  ///< in the world
  std::optional<JointVector> joints;
  std::vector<std::string> notes;
};

template <typename Named>
const Named* find_named(const std::vector<Named>& all, const std::string& name, const char* option,
                        std::vector<std::string>& problems) {
  const auto found = std::ranges::find(all, name, &Named::name);
  if (found != all.end()) return &*found;
  std::vector<std::string> names;
  for (const Named& one : all) names.push_back("'" + one.name + "'");
  problems.push_back(fmt::format("{} '{}' is not in the cell; it has {}", option, name,
                                 names.empty() ? "none" : fmt::format("{}", fmt::join(names, ", "))));
  return nullptr;
}

/// A positioner's flange in the world with all its joints at zero.
Pose flange_at_zero(const Positioner& positioner) {
  Pose pose = positioner.base;
  for (const Joint& joint : positioner.joints) pose = pose * joint.before * joint.after;
  return pose * positioner.flange;
}

Pose frame_in_world(const Cell& cell, const Frame& frame, std::vector<std::string>& notes) {
  if (!frame.carried_by) return frame.placement;
  const Positioner& carrier = cell.positioners.at(static_cast<std::size_t>(*frame.carried_by));
  notes.push_back(fmt::format("Frame {} is carried by {}, which is taken with all its joints at zero.",
                              frame.name, carrier.name));
  return flange_at_zero(carrier) * frame.placement;
}

std::optional<JointVector> given_joints(const Cell& cell, const std::vector<double>& values,
                                        std::vector<std::string>& problems) {
  const Arm& arm = cell.arm;
  if (static_cast<int>(values.size()) != arm.joint_count()) {
    std::vector<std::string> names;
    for (const Joint& joint : arm.joints) names.push_back(joint.name);
    problems.push_back(fmt::format("--joints has {} values; the arm has {} joints ({})", values.size(),
                                   arm.joint_count(), fmt::join(names, ", ")));
    return {};
  }
  JointVector joints(arm.joint_count());
  for (int i = 0; i < arm.joint_count(); ++i) {
    const auto index = static_cast<std::size_t>(i);
    const bool is_angle = arm.joints[index].type == JointType::revolute;
    joints[i] = is_angle ? values[index] * radians_per_degree : values[index];
  }
  return joints;
}

Question understand(const PoseSettings& settings, const Cell& cell) {
  Question question;
  std::vector<std::string> problems;
  if (settings.tool) {
    const Tool* tool = find_named(cell.tools, *settings.tool, "--tool", problems);
    if (tool) question.tool = tool->placement;
  }
  if (settings.frame) {
    const Frame* frame = find_named(cell.frames, *settings.frame, "--frame", problems);
    if (frame) question.frame = frame_in_world(cell, *frame, question.notes);
  }
  if (settings.joints) question.joints = given_joints(cell, *settings.joints, problems);
  if (!problems.empty()) throw CallError("pose", std::move(problems));
  return question;
}

PoseReport context_of(const PoseSettings& settings, const Cell& cell, const Question& question) {
  PoseReport report;
  report.cell_file = cell.file;
  report.cell = cell.name;
  report.arm = cell.arm.name;
  report.tool = settings.tool.value_or("");
  report.frame = settings.frame.value_or("");
  for (const Joint& joint : cell.arm.joints) {
    report.joint_names.push_back(joint.name);
    report.joint_types.push_back(joint.type);
  }
  report.asked = settings.asked;
  report.notes = question.notes;
  return report;
}

void add_solutions(const PoseSettings& settings, const Cell& cell, const Question& question,
                   const PoseFigures& figures, PoseReport& report) {
  const ConfigurationFinder finder(cell.arm, question.tool);
  const Configurations found = finder.find(question.frame * *settings.asked, settings.orientation);
  report.complete = found.complete;
  if (!found.complete) {
    report.notes.emplace_back(
        "There may be more configurations than these: they are not isolated, or were sought from "
        "many starts.");
  }
  for (const JointVector& joints : found.joints) {
    const std::vector<JointVector> inside = variants_inside(cell.arm, joints, settings.turns);
    for (const JointVector& variant : inside) report.configurations.push_back(figures.of(variant));
    if (!inside.empty()) continue;
    if (settings.beyond_limits) {
      report.configurations.push_back(figures.of(joints));
    } else {
      ++report.outside_limits;
    }
  }
}

}  // namespace

int run_pose(const PoseSettings& settings) {
  start_log(settings.log_level);
  spdlog::info("reading {}", settings.cell);
  Reading<Cell> reading = read_cell(settings.cell);
  if (!reading.value) throw InputError(std::move(reading.faults));
  const Cell& cell = *reading.value;
  const Question question = understand(settings, cell);
  const PoseFigures figures(cell.arm, question.tool, question.frame, settings.orientation);

  PoseReport report = context_of(settings, cell, question);
  report.characteristic_length = figures.characteristic_length();
  if (question.joints) {
    report.configurations.push_back(figures.of(*question.joints));
  } else {
    add_solutions(settings, cell, question, figures, report);
  }

  if (settings.json) {
    Output json(settings.json->target);
    write_pose_json(report, json.stream());
    json.finish();
    json.commit();
  }
  if (!settings.json || settings.json->target != "-") {
    Output text("-");
    write_pose_text(report, text.stream(), style_of_standard_output());
    text.finish();
  }
  return 0;
}

}  // namespace pathvet::commands
