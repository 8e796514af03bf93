#include <algorithm>
#include <ostream>

#include "pathvet/reporting/caution.hpp"
#include "pathvet/reporting/pose_report.hpp"
#include "reporting/json_values.hpp"
#include "reporting/units.hpp"

namespace pathvet {
namespace {

using namespace reporting;

Json margins_json(const PoseReport& report, const ConfigurationReport& configuration) {
  Json list = Json::array();
  for (std::size_t i = 0; i < configuration.margins.size(); ++i) {
    list.push_back(in_unit(configuration.margins[i], position_quantity(report.joint_types.at(i))));
  }
  return list;
}

Json roll_pitch_yaw_json(const Pose& pose) {
  Json list = Json::array();
  for (double angle : roll_pitch_yaw(pose.rotation)) list.push_back(in_unit(angle, Quantity::angle));
  return list;
}

void add_figures(Json& out, const PoseReport& report, const ConfigurationReport& configuration) {
  out["singular_values"] = Json::array();
  for (double value : configuration.singular_values) out["singular_values"].push_back(number(value));
  out["manipulability"] = number(configuration.manipulability());
  out["determinant"] = number(configuration.determinant);
  out["limit_margins"] = margins_json(report, configuration);
}

/// What belongs to the question rather than to an answer.
void add_context(Json& out, const PoseReport& report) {
  out["joint_names"] = report.joint_names;
  out["cell_file"] = report.cell_file;
  out["cell"] = report.cell;
  out["arm"] = report.arm;
  out["tool"] = text_or_null(report.tool);
  out["frame"] = text_or_null(report.frame);
  out["characteristic_length_mm"] = number(report.characteristic_length);
  out["notes"] = report.notes;
  out["caution"] = caution();
}

Json given_json(const PoseReport& report, const ConfigurationReport& configuration) {
  Json out;
  out["position"] = position(configuration.pose);
  out["quaternion"] = quaternion(configuration.pose);
  out["branch"] = configuration.branch;
  out["min_singular_value"] = number(configuration.min_singular_value());
  out["roll_pitch_yaw"] = roll_pitch_yaw_json(configuration.pose);
  out["joints"] = joint_values(configuration.joints, report.joint_types);
  out["inside_limits"] = configuration.inside_limits;
  add_figures(out, report, configuration);
  return out;
}

Json solution_json(const PoseReport& report, const ConfigurationReport& configuration) {
  Json out;
  out["joints"] = joint_values(configuration.joints, report.joint_types);
  out["branch"] = configuration.branch;
  out["inside_limits"] = configuration.inside_limits;
  out["min_singular_value"] = number(configuration.min_singular_value());
  add_figures(out, report, configuration);
  return out;
}

}  // namespace

void write_pose_json(const PoseReport& report, std::ostream& out) {
  Json root;
  if (report.asked) {
    root["solutions"] = Json::array();
    for (const auto& configuration : report.configurations) {
      root["solutions"].push_back(solution_json(report, configuration));
    }
    root["complete"] = report.complete;
    root["outside_limits"] = report.outside_limits;
    root["position"] = position(*report.asked);
    root["quaternion"] = quaternion(*report.asked);
  } else if (!report.configurations.empty()) {
    root = given_json(report, report.configurations.front());
  }
  add_context(root, report);
  out << text(root);
}

}  // namespace pathvet
