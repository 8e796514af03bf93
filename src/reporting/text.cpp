#include "pathvet/reporting/text.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <ostream>

#include "pathvet/reporting/caution.hpp"
#include "pathvet/reporting/messages.hpp"
#include "reporting/layout.hpp"
#include "reporting/phrases.hpp"
#include "reporting/strip.hpp"
#include "reporting/units.hpp"

namespace pathvet {
namespace {

using namespace reporting;

// More rows than these nobody reads at a desk; the other media have all.
constexpr std::size_t most_findings = 40;
constexpr std::size_t most_segments = 24;
constexpr int strip_columns = 24;

std::string arrow(const TextStyle& style) {
  return style.unicode ? " → " : " -> ";
}

std::string between(double begin, double end, int digits) {
  const std::string first = plain(begin, digits);
  const std::string last = plain(end, digits);
  return first == last ? "at " + first : first + " to " + last;
}

std::string counts(int errors, int warnings) {
  return errors + warnings == 0 ? "nothing found"
                                : counted(errors, "error") + ", " + counted(warnings, "warning");
}

std::string verdict_word(bool flagged, const TextStyle& style) {
  return painted(flagged ? "FLAGGED" : "CLEAR", flagged ? Colour::bad : Colour::good, style);
}

std::string where(const PathResult& path, const Finding& f, const TextStyle& style) {
  const SegmentResult& segment = segment_of(path, f);
  std::string text = fmt::format("{}{}{}, line {}\n{} %", segment.from, arrow(style), segment.to,
                                 segment.place.line, between(100 * f.begin, 100 * f.end, 4));
  if (segment.length > 0) text += fmt::format("\n{} mm", between(f.begin_length, f.end_length, 4));
  return text;
}

TableRow finding_row(const PathResult& path, const Finding& f, const TextStyle& style) {
  const bool is_error = level(f.code) == Level::error;
  return {{where(path, f, style)},
          {fmt::format("{}\n{}", is_error ? "error" : "warning", name(f.code)),
           is_error ? Colour::bad : Colour::doubtful},
          {message(path, f)},
          {remedy(path, f)}};
}

/// Errors first, else in the order of the path.
void write_findings(std::ostream& out, const PathResult& path, const TextStyle& style) {
  if (path.findings.empty()) return;
  std::vector<TableRow> rows;
  for (Level wanted : {Level::error, Level::warning}) {
    for (const Finding& f : path.findings) {
      if (level(f.code) != wanted || rows.size() == most_findings) continue;
      rows.push_back(finding_row(path, f, style));
    }
  }
  out << '\n';
  write_table(out, {"where", "what", "how bad", "what helps"}, rows, style);
  if (path.findings.size() > rows.size()) {
    write_paragraph(out, "",
                    fmt::format("... and {} more: --json lists all.", path.findings.size() - rows.size()),
                    style);
  }
}

const char* move_word(const SegmentResult& segment) {
  switch (segment.move) {
    case Move::joint:
      return "joint";
    case Move::circular:
      return "circular";
    default:
      return segment.turn_on_the_spot ? "turn" : "linear";
  }
}

TableRow segment_row(const PathResult& path, const SegmentResult& segment, const TextStyle& style) {
  const bool too_fast = segment.peak_ratio > 1;
  const std::string highest =
      segment.highest_speed
          ? plain_below(to_programmed_unit(segment, *segment.highest_speed)) + ' ' + programmed_unit(segment)
          : "";
  return {{fmt::format("{}", segment.index), Colour::none, true},
          {segment.from + arrow(style) + segment.to},
          {move_word(segment)},
          {strip(segment.ratio_profile, strip_columns, style.unicode)},
          {std::isfinite(segment.peak_ratio) ? plain(100 * segment.peak_ratio, 3) + " %" : "unbounded",
           too_fast ? Colour::bad : Colour::none, true},
          {axis_name(path, segment.peak_axis)},
          {highest, Colour::none, true}};
}

/// The segments' worst joint speeds; of a long path those with findings alone.
void write_segments(std::ostream& out, const PathResult& path, const TextStyle& style) {
  const bool all = path.segments.size() <= most_segments;
  std::vector<TableRow> rows;
  std::size_t left_out = 0;
  for (const SegmentResult& segment : path.segments) {
    if (!all && (segment.findings.empty() || rows.size() == most_segments)) {
      ++left_out;
    } else {
      rows.push_back(segment_row(path, segment, style));
    }
  }
  out << '\n';
  if (!rows.empty())
    write_table(out, {"#", "segment", "move", "joint speed (! over)", "worst", "joint", "holds to"}, rows,
                style);
  if (left_out > 0)
    out << fmt::format("... and {} not shown: --json lists all.\n", counted(long(left_out), "segment"));
}

void write_head(std::ostream& out, const Report& report, const PathResult& path, const TextStyle& style) {
  const std::string& title = path.name.empty() ? path.file : path.name;
  const bool flagged = report.is_flagged(path);
  // The verdict's colour has no width, so it goes in as the title of the paragraph only where there is none.
  const std::string counts_text = counts(path.count(Level::error), path.count(Level::warning));
  out << verdict_word(flagged, style);
  write_paragraph(out, ": ", fmt::format("{}: {}", title, counts_text),
                  {style.width - static_cast<int>(flagged ? 7 : 5), false, style.unicode});
  write_paragraph(out, "path   ", path.file, style);
  write_paragraph(out, "cell   ", fmt::format("{} ({}), arm: {}", path.cell, path.cell_file, path.arm),
                  style);
  write_paragraph(
      out, "run    ",
      fmt::format("{}, {} mm, {} s; continuity proven on {} % of it",
                  counted(static_cast<long>(path.segments.size()), "segment"), plain(path.length, 5),
                  plain(path.duration), fixed(100 * path.proven_fraction, 2)),
      style);
  std::vector<std::string> joints;
  for (Eigen::Index i = 0; i < path.start.size(); ++i) {
    const AxisResult& axis = path.axes.at(static_cast<std::size_t>(i));
    joints.push_back(
        fmt::format("{} {}", axis.name, plain(to_user(path.start[i], position_quantity(axis.type)), 5)));
  }
  write_paragraph(
      out, "start  ",
      fmt::format("{}{}: {}", path.start_taught ? "taught" : "solved",
                  path.start_branch.empty() ? "" : ", branch " + path.start_branch, fmt::join(joints, ", ")),
      style);
}

void write_path(std::ostream& out, const Report& report, const PathResult& path, const TextStyle& style) {
  write_head(out, report, path, style);
  write_findings(out, path, style);
  write_segments(out, path, style);
  if (!path.notes.empty()) out << '\n';
  for (const std::string& note : path.notes) write_paragraph(out, "note: ", note, style);
}

}  // namespace

void write_text(const Report& report, std::ostream& out, const TextStyle& style) {
  if (report.paths.size() > 1) {
    const auto flagged = std::ranges::count_if(
        report.paths, [&report](const PathResult& path) { return report.is_flagged(path); });
    out << verdict_word(report.is_flagged(), style)
        << fmt::format(": {} of {} paths flagged; {}\n\n", flagged, report.paths.size(),
                       counts(report.errors(), report.warnings()));
  }
  for (const PathResult& path : report.paths) {
    write_path(out, report, path, style);
    out << '\n';
  }
  write_paragraph(out, "Caution: ", caution(), style);
}

}  // namespace pathvet
