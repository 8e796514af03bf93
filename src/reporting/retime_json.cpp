#include <array>
#include <ostream>

#include "pathvet/reporting/caution.hpp"
#include "pathvet/reporting/retime_report.hpp"
#include "reporting/json_values.hpp"
#include "reporting/units.hpp"

namespace pathvet {
namespace {

using namespace reporting;

constexpr std::array<const char*, 4> move_names = {"start", "linear", "circular", "joint"};

Json speed_json(const RetimedSegment& segment, double speed) {
  if (segment.move == Move::joint) return number(100 * speed);
  return in_unit(speed, segment.turn_on_the_spot ? Quantity::angular_speed : Quantity::linear_speed);
}

Json gap_json(double now, double bound) {
  return bound > 0 ? number(100 * Retiming::gap(now, bound)) : Json(nullptr);
}

Json segment_json(const Retiming& retiming, const RetimedSegment& segment, const Profile* profile) {
  Json out;
  out["index"] = segment.index;
  out["from"] = segment.from;
  out["to"] = segment.to;
  out["move"] = move_names.at(static_cast<std::size_t>(segment.move));
  out["line"] = segment.place.line;
  out["unit"] = segment.move == Move::joint ? "%" : segment.turn_on_the_spot ? "deg/s" : "mm/s";
  out["outcome"] = !segment.hopeless.empty() ? "left" : segment.changed() ? "changed" : "unchanged";
  out["reason"] = text_or_null(segment.hopeless);
  out["speed_before"] = speed_json(segment, segment.old_speed);
  out["duration_before_s"] = number(segment.old_duration);
  out["duration_s"] = number(segment.new_duration);
  out["bound_s"] = number(segment.bound);
  out["gap_percent"] = gap_json(segment.new_duration, segment.bound);
  if (profile)
    out["time_optimal_s"] = number(profile->durations.at(static_cast<std::size_t>(segment.index - 1)));
  out["stretches"] = Json::array();
  for (const RetimedStretch& stretch : segment.stretches) {
    Json one;
    one["to"] = stretch.to;
    one["begin"] = number(stretch.begin);
    one["end"] = number(stretch.end);
    one["speed"] = speed_json(segment, stretch.speed);
    one["duration_s"] = number(stretch.duration);
    one["joint"] =
        stretch.limit < 0 ? Json(nullptr) : Json(retiming.limits.at(static_cast<std::size_t>(stretch.limit)));
    one["where"] = stretch.limit < 0 ? Json(nullptr) : number(stretch.where);
    out["stretches"].push_back(std::move(one));
  }
  return out;
}

Json profile_json(const Profile& profile) {
  Json out;
  out["duration_s"] = number(profile.duration);
  out["grid_points"] = profile.grid_points;
  out["segment_durations_s"] = Json::array();
  for (double duration : profile.durations) out["segment_durations_s"].push_back(number(duration));
  out["notes"] = profile.notes;
  return out;
}

}  // namespace

void write_retime_json(const RetimeReport& report, std::ostream& out) {
  Json root;
  root["format"] = "pathvet-retiming";
  root["version"] = 1;
  root["tool_version"] = report.tool_version;
  root["caution"] = caution();
  root["file"] = report.file;
  root["output"] = text_or_null(report.output);
  root["name"] = report.before.name;
  root["cell_file"] = report.before.cell_file;
  root["settings"] = {{"by", report.by},
                      {"most_cuts", report.options.most_cuts},
                      {"reserve", number(report.options.reserve)},
                      {"faster", report.options.faster}};
  root["verdict"] = report.flagged ? "flagged" : "clear";
  root["errors_before"] = report.before.count(Level::error);
  root["duration_before_s"] = number(report.before.duration);
  if (report.retiming) {
    const Retiming& r = *report.retiming;
    root["errors"] = r.after.count(Level::error);
    root["warnings"] = r.after.count(Level::warning);
    root["duration_s"] = number(r.after.duration);
    root["bound_s"] = number(r.bound);
    root["gap_percent"] = gap_json(r.after.duration, r.bound);
    root["extra_waypoints"] = r.extra_waypoints;
    root["segments"] = Json::array();
    for (const RetimedSegment& segment : r.segments)
      root["segments"].push_back(segment_json(r, segment, report.profile ? &*report.profile : nullptr));
  }
  if (report.profile) root["time_optimal"] = profile_json(*report.profile);
  out << text(root);
}

}  // namespace pathvet
