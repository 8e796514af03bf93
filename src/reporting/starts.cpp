#include "pathvet/reporting/starts.hpp"

#include <fmt/format.h>

#include <cmath>
#include <ostream>

#include "pathvet/reporting/caution.hpp"
#include "reporting/json_values.hpp"
#include "reporting/layout.hpp"
#include "reporting/phrases.hpp"
#include "reporting/units.hpp"

namespace pathvet {
namespace {

using namespace reporting;

constexpr int list_decimals = 3;

std::string joints_text(const StartRanking& ranking, const JointVector& joints) {
  std::vector<std::string> values;
  for (std::size_t i = 0; i < ranking.joint_types.size(); ++i) {
    values.push_back(
        fixed(to_user(joints[static_cast<Eigen::Index>(i)], position_quantity(ranking.joint_types[i])),
              list_decimals));
  }
  return fmt::format("{}", fmt::join(values, " "));
}

std::string result_text(const StartTrial& trial) {
  if (trial.errors == 0) return trial.warnings == 0 ? "clear" : counted(trial.warnings, "warning");
  std::string text = counted(trial.errors, "error");
  if (trial.first_error)
    text += fmt::format(", first {} on segment {}", name(*trial.first_error), trial.first_error_segment);
  return trial.warnings == 0 ? text : text + "; " + counted(trial.warnings, "warning");
}

std::string speed_text(const StartTrial& trial) {
  if (!std::isfinite(trial.peak_ratio)) return "unbounded";
  return trial.peak_joint.empty()
             ? "0 %"
             : fmt::format("{} % {}", plain(100 * trial.peak_ratio, 3), trial.peak_joint);
}

}  // namespace

void write_starts_text(const StartRanking& ranking, std::ostream& out, const TextStyle& style) {
  write_paragraph(out, "",
                  fmt::format("{} for {} ({}); cell {}, arm: {}",
                              counted(static_cast<long>(ranking.trials.size()), "start configuration"),
                              ranking.path_name.empty() ? "the path" : ranking.path_name, ranking.path_file,
                              ranking.cell, ranking.arm),
                  style);
  if (ranking.trials.empty()) {
    write_paragraph(out, "", "No configuration reaches the start pose.", style);
  } else {
    std::vector<TableRow> rows;
    for (const StartTrial& trial : ranking.trials) {
      const Colour colour = trial.errors > 0     ? Colour::bad
                            : trial.warnings > 0 ? Colour::doubtful
                                                 : Colour::good;
      rows.push_back({{fmt::format("{}", rows.size() + 1), Colour::none, true},
                      {joints_text(ranking, trial.joints)},
                      {trial.branch},
                      {result_text(trial), colour},
                      {speed_text(trial)},
                      {trial.limit_margin_joint.empty()
                           ? "no limits"
                           : fmt::format("{} % {}", plain(100 * trial.limit_margin_share, 3),
                                         trial.limit_margin_joint)}});
    }
    out << '\n';
    write_table(out,
                {"#", fmt::format("{}", fmt::join(ranking.joint_names, " ")), "branch", "whole path",
                 "top speed", "least room"},
                rows, style);
    if (!ranking.complete)
      write_paragraph(
          out, "", "The start pose has more configurations than can be listed: these stand for them.", style);
  }
  out << '\n';
  write_paragraph(out, "Caution: ", caution(), style);
}

void write_starts_json(const StartRanking& ranking, std::ostream& out) {
  Json root;
  root["format"] = "pathvet-starts";
  root["version"] = 1;
  root["caution"] = caution();
  root["file"] = ranking.path_file;
  root["name"] = ranking.path_name;
  root["cell_file"] = ranking.cell_file;
  root["cell"] = ranking.cell;
  root["arm"] = ranking.arm;
  root["joint_names"] = ranking.joint_names;
  root["complete"] = ranking.complete;
  root["starts"] = Json::array();
  for (const StartTrial& trial : ranking.trials) {
    Json entry;
    entry["rank"] = root["starts"].size() + 1;
    entry["joints"] = joint_values(trial.joints, ranking.joint_types);
    entry["branch"] = trial.branch;
    entry["errors"] = trial.errors;
    entry["warnings"] = trial.warnings;
    entry["peak_ratio"] = number(trial.peak_ratio);
    entry["peak_joint"] = text_or_null(trial.peak_joint);
    entry["limit_margin_share"] = number(trial.limit_margin_share);
    entry["limit_margin_joint"] = text_or_null(trial.limit_margin_joint);
    entry["first_error"] = trial.first_error ? Json(name(*trial.first_error)) : Json(nullptr);
    entry["first_error_segment"] = trial.first_error ? Json(trial.first_error_segment) : Json(nullptr);
    root["starts"].push_back(std::move(entry));
  }
  out << text(root);
}

}  // namespace pathvet
