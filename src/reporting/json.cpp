#include "pathvet/reporting/json.hpp"

#include <array>
#include <ostream>

#include "pathvet/reporting/caution.hpp"
#include "reporting/json_finding.hpp"
#include "reporting/json_report.hpp"
#include "reporting/phrases.hpp"
#include "reporting/units.hpp"

namespace pathvet {
namespace {

using namespace reporting;

constexpr std::array<const char*, 4> move_names = {"start", "linear", "circular", "joint"};

Json settings_json(const CheckOptions& options) {
  Json out;
  out["step_mm"] = number(options.step_length);
  out["step_deg"] = in_unit(options.step_angle, Quantity::angle);
  out["limit_margin_deg"] = in_unit(options.limit_margin_angle, Quantity::angle);
  out["limit_margin_mm"] = number(options.limit_margin_length);
  out["speed_margin"] = number(options.speed_margin);
  out["singular_below"] = number(options.singular_below);
  if (options.reduced_speed) out["reduced_speed"] = number(*options.reduced_speed);
  return out;
}

Json start_json(const PathResult& path) {
  return {{"joints", joint_values(path.start, joint_types(path))},
          {"branch", path.start_branch},
          {"origin", path.start_taught ? "taught" : "solved"}};
}

Json axis_json(const AxisResult& axis) {
  const Quantity where = position_quantity(axis.type);
  const Quantity rate = speed_quantity(axis.type);
  Json out;
  out["name"] = axis.name;
  out["unit"] = unit(where);
  out["lower"] = in_unit(axis.lower, where);
  out["upper"] = in_unit(axis.upper, where);
  out["speed_limit"] = in_unit(axis.speed_limit, rate);
  out["min"] = in_unit(axis.min, where);
  out["max"] = in_unit(axis.max, where);
  out["peak_speed"] = in_unit(axis.peak_speed, rate);
  out["peak_ratio"] = number(axis.peak_ratio);
  out["travel"] = in_unit(axis.travel, where);
  return out;
}

Json totals_json(const PathResult& path) {
  Json out;
  out["length_mm"] = number(path.length);
  out["duration_s"] = number(path.duration);
  out["samples"] = path.samples;
  out["proven_fraction"] = number(path.proven_fraction);
  out["position_residual_mm"] = number(path.position_residual);
  out["orientation_residual_deg"] = in_unit(path.orientation_residual, Quantity::angle);
  return out;
}

Json limit_margin_json(const PathResult& path, const SegmentResult& segment) {
  if (!segment.limit_margin || segment.limit_margin_axis < 0) return nullptr;
  const AxisResult& axis = path.axes.at(static_cast<std::size_t>(segment.limit_margin_axis));
  return in_unit(segment.limit_margin, position_quantity(axis.type));
}

void add_segment_extras(Json& out, const PathResult& path, const SegmentResult& segment) {
  out["dwell_s"] = number(segment.dwell);
  out["column"] = segment.place.column;
  out["peak_tcp_speed"] = number(segment.peak_tcp_speed);
  out["peak_point_speed"] = number(segment.peak_point_speed);
  out["peak_point"] = text_or_null(segment.peak_point);
  if (segment.drift) out["drift"] = joint_values(*segment.drift, joint_types(path));
}

Json segment_json(const PathResult& path, const SegmentResult& segment) {
  Json out;
  out["index"] = segment.index;
  out["from"] = segment.from;
  out["to"] = segment.to;
  out["move"] = move_names.at(static_cast<std::size_t>(segment.move));
  out["line"] = segment.place.line;
  out["length_mm"] = number(segment.length);
  out["turn_deg"] = in_unit(segment.turn, Quantity::angle);
  out["duration_s"] = number(segment.duration);
  out["samples"] = segment.samples;
  out["branch"] = segment.branch;
  out["peak_ratio"] = number(segment.peak_ratio);
  out["peak_joint"] = text_or_null(axis_name(path, segment.peak_axis));
  out["min_singular_value"] = number(segment.min_singular_value);
  out["limit_margin"] = limit_margin_json(path, segment);
  out["limit_margin_joint"] = text_or_null(axis_name(path, segment.limit_margin_axis));
  out["highest_speed"] =
      segment.highest_speed ? number(to_programmed_unit(segment, *segment.highest_speed)) : nullptr;
  out["findings"] = segment.findings;
  add_segment_extras(out, path, segment);
  return out;
}

Json path_json(const Report& report, const PathResult& path) {
  Json out;
  out["file"] = path.file;
  out["name"] = path.name;
  out["cell_file"] = path.cell_file;
  out["cell"] = path.cell;
  out["arm"] = path.arm;
  out["characteristic_length_mm"] = number(path.characteristic_length);
  out["verdict"] = report.verdict(path);
  out["errors"] = path.count(Level::error);
  out["warnings"] = path.count(Level::warning);
  out["start"] = start_json(path);
  out["joints"] = Json::array();
  for (const AxisResult& axis : path.axes) out["joints"].push_back(axis_json(axis));
  out["totals"] = totals_json(path);
  out["segments"] = Json::array();
  for (const SegmentResult& segment : path.segments) out["segments"].push_back(segment_json(path, segment));
  out["findings"] = Json::array();
  for (std::size_t i = 0; i < path.findings.size(); ++i) out["findings"].push_back(finding_json(path, i));
  out["notes"] = path.notes;
  return out;
}

}  // namespace

Json reporting::report_json(const Report& report) {
  Json root;
  root["format"] = "pathvet-report";
  root["version"] = 1;
  root["tool_version"] = report.tool_version;
  root["caution"] = caution();
  root["settings"] = settings_json(report.options);
  root["verdict"] = report.verdict();
  root["errors"] = report.errors();
  root["warnings"] = report.warnings();
  root["paths"] = Json::array();
  for (const PathResult& path : report.paths) root["paths"].push_back(path_json(report, path));
  return root;
}

void write_json(const Report& report, std::ostream& out) {
  out << text(report_json(report));
}

}  // namespace pathvet
