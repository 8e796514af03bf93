#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <ostream>

#include "pathvet/reporting/caution.hpp"
#include "pathvet/reporting/retime_report.hpp"
#include "reporting/layout.hpp"
#include "reporting/phrases.hpp"
#include "reporting/units.hpp"

namespace pathvet {
namespace {

using namespace reporting;

constexpr std::size_t most_rows = 60;  // more nobody reads at a desk; the JSON has all
constexpr double no_change = 5e-7;     // s

std::string arrow(const TextStyle& style) {
  return style.unicode ? " → " : " -> ";
}

std::string seconds(double value) {
  return fixed(value, 4);
}

/// How much more than the bound, in percent; what rounds to nothing is nothing.
std::string gap_text(double now, double bound) {
  if (!(bound > 0)) return "";
  const double gap = 100 * (now / bound - 1);
  return fixed(std::abs(gap) < 0.005 ? 0.0 : gap, 2) + " %";
}

double in_user_unit(const RetimedSegment& segment, double speed) {
  if (segment.move == Move::joint) return 100 * speed;
  return to_user(speed, segment.turn_on_the_spot ? Quantity::angular_speed : Quantity::linear_speed);
}

const char* unit_of(const RetimedSegment& segment) {
  if (segment.move == Move::joint) return "%";
  return unit(segment.turn_on_the_spot ? Quantity::angular_speed : Quantity::linear_speed);
}

/// Where on the segment as it was, in percent.
std::string percent(double fraction) {
  return fixed(100 * fraction, 2);
}

TableRow hopeless_row(const RetimedSegment& segment, const TextStyle& style) {
  return {{fmt::format("{}", segment.index), Colour::none, true},
          {segment.from + arrow(style) + segment.to},
          {"LEFT AS IT WAS", Colour::bad},
          {plain(in_user_unit(segment, segment.old_speed)) + ' ' + unit_of(segment), Colour::none, true},
          {"no speed helps: " + segment.hopeless},
          {seconds(segment.new_duration), Colour::none, true}};
}

void add_rows(std::vector<TableRow>& rows, const Retiming& retiming, const RetimedSegment& segment,
              const TextStyle& style) {
  if (!segment.hopeless.empty()) {
    rows.push_back(hopeless_row(segment, style));
    return;
  }
  std::string from = segment.from;
  for (const RetimedStretch& stretch : segment.stretches) {
    const std::string reason =
        stretch.limit < 0
            ? "as programmed"
            : fmt::format("{} at {} %", retiming.limits.at(static_cast<std::size_t>(stretch.limit)),
                          percent(stretch.where));
    rows.push_back(
        {{fmt::format("{}", segment.index), Colour::none, true},
         {from + arrow(style) + stretch.to},
         {percent(stretch.begin) + " to " + percent(stretch.end) + " %"},
         {plain(in_user_unit(segment, stretch.speed)) + ' ' + unit_of(segment), Colour::none, true},
         {reason},
         {seconds(stretch.duration), Colour::none, true}});
    from = stretch.to;
  }
}

void write_stretches(std::ostream& out, const Retiming& retiming, const TextStyle& style) {
  std::vector<TableRow> rows;
  std::size_t left_out = 0;
  for (const RetimedSegment& segment : retiming.segments) {
    if (!segment.changed() && segment.hopeless.empty()) continue;
    if (rows.size() >= most_rows) {
      ++left_out;
      continue;
    }
    add_rows(rows, retiming, segment, style);
  }
  if (rows.empty()) {
    out << "No speed had to change.\n\n";
    return;
  }
  write_table(out, {"#", "stretch", "of the segment", "speed", "set by", "s"}, rows, style);
  if (left_out > 0)
    out << fmt::format("... and {} not shown: --json lists all.\n", counted(long(left_out), "segment"));
  out << '\n';
}

/// Segments that take longer than before or than the bound.
void write_costs(std::ostream& out, const Retiming& retiming, const TextStyle& style) {
  std::vector<TableRow> rows;
  for (const RetimedSegment& segment : retiming.segments) {
    if (!segment.changed() || rows.size() >= most_rows) continue;
    rows.push_back(
        {{fmt::format("{}", segment.index), Colour::none, true},
         {segment.from + arrow(style) + segment.to},
         {plain(in_user_unit(segment, segment.old_speed)) + ' ' + unit_of(segment), Colour::none, true},
         {seconds(segment.old_duration), Colour::none, true},
         {seconds(segment.new_duration), Colour::none, true},
         {seconds(segment.bound), Colour::none, true},
         {gap_text(segment.new_duration, segment.bound), Colour::none, true}});
  }
  if (rows.empty()) return;
  write_table(out, {"#", "segment", "programmed", "s before", "s now", "s bound", "gap"}, rows, style);
  out << '\n';
}

void write_totals(std::ostream& out, const RetimeReport& report, const TextStyle& style) {
  const double before = report.before.duration;
  write_paragraph(out, "cycle before   ",
                  seconds(before) + " s, with " + counted(report.before.count(Level::error), "error"), style);
  if (report.retiming) {
    const Retiming& r = *report.retiming;
    const double change = r.after.duration - before;
    const std::string changed = std::abs(change) < no_change ? std::string("unchanged")
                                                             : fmt::format("{}{} %", change > 0 ? "+" : "",
                                                                           fixed(100 * change / before, 2));
    write_paragraph(out, "cycle now      ",
                    fmt::format("{} s ({}), with {}; {}", seconds(r.after.duration), changed,
                                counted(r.after.count(Level::error), "error"),
                                counted(r.extra_waypoints, "extra waypoint")),
                    style);
    write_paragraph(out, "bound          ",
                    fmt::format("{} s by joint speeds alone{}; the gap to it is {}", seconds(r.bound),
                                report.options.faster ? "" : " and the programmed speeds",
                                gap_text(r.after.duration, r.bound)),
                    style);
  }
  if (report.profile) {
    write_paragraph(
        out, "time-optimal   ",
        fmt::format(
            "{} s with joint accelerations too, at rest where the path stops the arm ({} grid points)",
            seconds(report.profile->duration), report.profile->grid_points),
        style);
    for (const std::string& note : report.profile->notes) write_paragraph(out, "note: ", note, style);
  }
}

/// What the check of the written path still finds.
void write_left(std::ostream& out, const PathResult& checked, const TextStyle& style) {
  std::vector<std::string> lines;
  for (const Finding& f : checked.findings) {
    if (level(f.code) != Level::error || lines.size() >= most_rows) continue;
    const SegmentResult& segment = segment_of(checked, f);
    std::string line = fmt::format("{}{}{}: {}{}", segment.from, arrow(style), segment.to, name(f.code),
                                   f.axis < 0 ? "" : " " + axis_name(checked, f.axis));
    if (std::ranges::find(lines, line) == lines.end()) lines.push_back(std::move(line));
  }
  if (lines.empty()) return;
  write_paragraph(out, "", "What no speed helps against (pathvet check tells more):", style);
  for (const std::string& line : lines) write_paragraph(out, "  ", line, style);
  out << '\n';
}

}  // namespace

void write_retime_text(const RetimeReport& report, std::ostream& out, const TextStyle& style) {
  const std::string& title = report.before.name.empty() ? report.file : report.before.name;
  out << painted(report.flagged ? "FLAGGED" : "CLEAR", report.flagged ? Colour::bad : Colour::good, style);
  write_paragraph(out, ": ", fmt::format("{}, re-timed by {}", title, report.by),
                  {style.width - (report.flagged ? 7 : 5), false, style.unicode});
  write_paragraph(out, "path           ", report.file, style);
  if (!report.output.empty()) write_paragraph(out, "written to     ", report.output, style);
  write_totals(out, report, style);
  out << '\n';
  if (report.retiming) {
    write_stretches(out, *report.retiming, style);
    write_costs(out, *report.retiming, style);
    write_left(out, report.retiming->after, style);
  }
  write_paragraph(out, "Caution: ", caution(), style);
}

}  // namespace pathvet
