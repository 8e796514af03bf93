#include <fmt/format.h>

#include <cmath>
#include <ostream>

#include "pathvet/reporting/caution.hpp"
#include "pathvet/reporting/pose_report.hpp"
#include "reporting/layout.hpp"
#include "reporting/phrases.hpp"
#include "reporting/units.hpp"

namespace pathvet {
namespace {

using namespace reporting;

constexpr int list_decimals = 3;  // a row a configuration has to fit on a line
constexpr int pose_decimals = 4;  // 0.1 µm and 0.0001 deg: far below what a path file's tolerances tell apart

std::string joint_text(const PoseReport& report, std::size_t joint, double value, int decimals) {
  return fixed(to_user(value, position_quantity(report.joint_types.at(joint))), decimals);
}

std::string question(const PoseReport& report) {
  return fmt::format("TCP of {} in {}; cell {} ({}), arm: {}",
                     report.tool.empty() ? "the bare flange" : "tool " + report.tool,
                     report.frame.empty() ? "the world" : "frame " + report.frame, report.cell,
                     report.cell_file, report.arm);
}

std::string position_text(const Pose& pose) {
  const Vector3& p = pose.position;
  return fmt::format("{} {} {} mm", fixed(p.x(), pose_decimals), fixed(p.y(), pose_decimals),
                     fixed(p.z(), pose_decimals));
}

std::string quaternion_text(const Pose& pose) {
  constexpr int decimals = 7;
  const Eigen::Quaterniond q = quaternion(pose.rotation);
  return fmt::format("{} {} {} {} (w x y z)", fixed(q.w(), decimals), fixed(q.x(), decimals),
                     fixed(q.y(), decimals), fixed(q.z(), decimals));
}

std::string roll_pitch_yaw_text(const Pose& pose) {
  const Vector3 angles = roll_pitch_yaw(pose.rotation);
  return fmt::format("{} {} {} deg", fixed(degrees(angles.x()), pose_decimals),
                     fixed(degrees(angles.y()), pose_decimals), fixed(degrees(angles.z()), pose_decimals));
}

std::string margin_text(const PoseReport& report, std::size_t joint, const std::optional<double>& margin) {
  if (!margin) return report.joint_names.at(joint) + " turns without end";
  return fmt::format("{} {}", report.joint_names.at(joint),
                     amount(*margin, position_quantity(report.joint_types.at(joint))));
}

std::string branch_text(const std::string& branch) {
  if (branch.empty()) return "none for this arm";
  return branch.size() == 3 ? branch + " (shoulder, elbow, wrist)" : branch + " (sign of the determinant)";
}

std::string singular_values_text(const PoseReport& report, const ConfigurationReport& configuration) {
  std::vector<std::string> values;
  for (double value : configuration.singular_values) values.push_back(plain(value));
  return fmt::format("{} (lengths over {} mm)", fmt::join(values, ", "), plain(report.characteristic_length));
}

void write_given(std::ostream& out, const PoseReport& report, const ConfigurationReport& given,
                 const TextStyle& style) {
  std::vector<std::string> joints, margins;
  for (std::size_t i = 0; i < report.joint_names.size(); ++i) {
    joints.push_back(report.joint_names[i] + ' ' +
                     joint_text(report, i, given.joints[static_cast<Eigen::Index>(i)], pose_decimals));
    margins.push_back(margin_text(report, i, given.margins.at(i)));
  }
  write_paragraph(out, "joints                   ", fmt::format("{}", fmt::join(joints, ", ")), style);
  write_paragraph(out, "position                 ", position_text(given.pose), style);
  write_paragraph(out, "quaternion               ", quaternion_text(given.pose), style);
  write_paragraph(out, "roll-pitch-yaw           ", roll_pitch_yaw_text(given.pose), style);
  write_paragraph(out, "branch                   ", branch_text(given.branch), style);
  write_paragraph(out, "smallest singular value  ", plain(given.min_singular_value()), style);
  write_paragraph(out, "singular values          ", singular_values_text(report, given), style);
  write_paragraph(out, "manipulability           ",
                  plain(given.manipulability()) +
                      (given.determinant ? "; determinant " + plain(*given.determinant) : std::string()),
                  style);
  write_paragraph(out, "to the limits            ",
                  fmt::format("{}{}", given.inside_limits ? "" : "OUTSIDE: ", fmt::join(margins, ", ")),
                  style);
}

/// The joint that is nearest to a limit (or furthest beyond), told with its distance.
std::string tightest(const PoseReport& report, const ConfigurationReport& configuration) {
  std::size_t worst = configuration.margins.size();
  for (std::size_t i = 0; i < configuration.margins.size(); ++i) {
    if (!configuration.margins[i]) continue;
    if (worst == configuration.margins.size() || *configuration.margins[i] < *configuration.margins[worst])
      worst = i;
  }
  return worst == configuration.margins.size() ? ""
                                               : margin_text(report, worst, configuration.margins[worst]);
}

void write_solutions(std::ostream& out, const PoseReport& report, const TextStyle& style) {
  write_paragraph(out, "pose  ", position_text(*report.asked) + "; " + quaternion_text(*report.asked), style);
  out << fmt::format("\n{}", counted(static_cast<long>(report.configurations.size()), "configuration"));
  if (report.outside_limits > 0) out << fmt::format("; {} more beyond the limits", report.outside_limits);
  out << '\n';
  std::vector<TableRow> rows;
  for (const ConfigurationReport& configuration : report.configurations) {
    std::vector<std::string> joints;
    for (std::size_t i = 0; i < report.joint_names.size(); ++i) {
      joints.push_back(
          joint_text(report, i, configuration.joints[static_cast<Eigen::Index>(i)], list_decimals));
    }
    const bool inside = configuration.inside_limits;
    rows.push_back({{fmt::format("{}", rows.size() + 1), Colour::none, true},
                    {fmt::format("{}", fmt::join(joints, " "))},
                    {configuration.branch},
                    {plain(configuration.min_singular_value(), 3)},
                    {(inside ? "" : "BEYOND, ") + tightest(report, configuration),
                     inside ? Colour::none : Colour::bad}});
  }
  const std::string names = fmt::format("{}", fmt::join(report.joint_names, " "));
  if (!rows.empty()) write_table(out, {"#", names, "branch", "sing. v.", "nearest limit"}, rows, style);
}

}  // namespace

void write_pose_text(const PoseReport& report, std::ostream& out, const TextStyle& style) {
  write_paragraph(out, "", question(report), style);
  out << '\n';
  if (report.asked) {
    write_solutions(out, report, style);
  } else if (!report.configurations.empty()) {
    write_given(out, report, report.configurations.front(), style);
  }
  out << '\n';
  for (const std::string& note : report.notes) write_paragraph(out, "note: ", note, style);
  write_paragraph(out, "Caution: ", caution(), style);
}

}  // namespace pathvet
