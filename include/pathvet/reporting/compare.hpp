#pragma once

#include <array>
#include <iosfwd>
#include <optional>
#include <string>
#include <vector>

#include "pathvet/reporting/text.hpp"
#include "pathvet/xml/faults.hpp"

namespace pathvet {

/// A finding as read back from a report; units are those of reports (mm, deg, s).
struct SavedFinding {
  std::string code, level, from, to;
  std::string joint;  ///< empty: none is meant
  std::string message, unit;
  int segment = 0;                                          ///< counts from 1
  int line = 0;                                             ///< in the path file
  double begin = 0, end = 0;                                ///< fractions of the segment
  double begin_mm = 0, end_mm = 0, begin_s = 0, end_s = 0;  ///< from the segment's begin
  std::optional<double> value, limit, ratio;
};

struct SavedSegment {
  std::string from, to;
  double length_mm = 0, duration_s = 0;
};

struct SavedPath {
  std::string file, name;
  std::vector<SavedSegment> segments;
  std::vector<SavedFinding> findings;
};

/// What a comparison needs of a JSON report.
struct SavedReport {
  std::string file;  ///< as given by the user
  std::string verdict;
  std::vector<std::string> settings;  ///< "name = value" each, in the report's order
  std::vector<SavedPath> paths;
};

/// `text` as a report, or what is wrong with it: where it isn't JSON with line and column, otherwise at 1:1
/// with the member that is missing or of another kind.
[[nodiscard]] Reading<SavedReport> read_saved_report(const std::string& file, const std::string& text);

/// In the order of reports.
enum class Change { added, worse, moved, better, fixed, unchanged };
[[nodiscard]] const char* name(Change change);

struct ComparedFinding {
  Change change = Change::unchanged;
  std::string path;  ///< its file in the newer report; in the older one where it is gone
  std::optional<SavedFinding> before, after;
};

struct Comparison {
  std::string before_file, after_file, before_verdict, after_verdict;
  std::vector<std::string> settings;  ///< those that differ, as sentences
  std::vector<ComparedFinding> findings;

  [[nodiscard]] int count(Change change) const;
  /// Whether anything is new or worse.
  [[nodiscard]] bool has_worsened() const { return count(Change::added) + count(Change::worse) > 0; }
};

/// What became of every finding. Paths are matched by file, then by name; a single one on either side always.
/// Findings of one code and joint are matched between waypoints that both paths have, so that waypoints put
/// in, taken out or renamed between them don't matter; one that goes on across a waypoint counts once. Worse
/// and better: by more than a thousandth in the measure of its code; moved: an end lies more than a
/// millimetre elsewhere (a hundredth of the time where there is no length).
[[nodiscard]] Comparison compare_reports(const SavedReport& before, const SavedReport& after);

void write_comparison_text(const Comparison& comparison, std::ostream& out, const TextStyle& style);
void write_comparison_json(const Comparison& comparison, std::ostream& out);

}  // namespace pathvet
