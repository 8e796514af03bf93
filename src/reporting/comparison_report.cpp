#include <fmt/format.h>

#include <ostream>

#include "pathvet/reporting/caution.hpp"
#include "pathvet/reporting/compare.hpp"
#include "reporting/json_values.hpp"
#include "reporting/layout.hpp"
#include "reporting/units.hpp"

namespace pathvet {
namespace {

using namespace reporting;

constexpr std::array changes = {Change::added,  Change::worse, Change::moved,
                                Change::better, Change::fixed, Change::unchanged};

Colour colour_of(Change change) {
  switch (change) {
    case Change::added:
    case Change::worse:
      return Colour::bad;
    case Change::moved:
      return Colour::doubtful;
    default:
      return Colour::good;
  }
}

std::string counts_text(const Comparison& comparison) {
  std::string text;
  for (Change change : changes) {
    text += fmt::format("{}{} {}", text.empty() ? "" : ", ", comparison.count(change), name(change));
  }
  return text;
}

/// Where and how much: "B to C, 412 of 360 deg/s".
std::string side_text(const std::optional<SavedFinding>& finding) {
  if (!finding) return "-";
  std::string text = finding->from + " to " + finding->to;
  if (finding->value) {
    text += ", " + plain(*finding->value);
    if (finding->limit) text += " (limit " + plain(*finding->limit) + ")";
    if (!finding->unit.empty()) text += " " + finding->unit;
  }
  return text;
}

TableRow row(const ComparedFinding& one) {
  const SavedFinding& f = one.after ? *one.after : *one.before;
  return {{name(one.change), colour_of(one.change)},
          {f.joint.empty() ? f.code : f.code + " " + f.joint},
          {one.path},
          {side_text(one.before)},
          {side_text(one.after)}};
}

Json side_json(const std::optional<SavedFinding>& finding) {
  if (!finding) return nullptr;
  Json out;
  out["segment"] = finding->segment;
  out["from"] = finding->from;
  out["to"] = finding->to;
  out["line"] = finding->line;
  out["begin"] = number(finding->begin);
  out["end"] = number(finding->end);
  out["value"] = number(finding->value);
  out["limit"] = number(finding->limit);
  out["unit"] = finding->unit;
  out["message"] = finding->message;
  return out;
}

Json finding_json(const ComparedFinding& one) {
  const SavedFinding& f = one.after ? *one.after : *one.before;
  Json out;
  out["change"] = name(one.change);
  out["path"] = one.path;
  out["code"] = f.code;
  out["level"] = f.level;
  out["joint"] = text_or_null(f.joint);
  out["old"] = side_json(one.before);
  out["new"] = side_json(one.after);
  return out;
}

}  // namespace

void write_comparison_text(const Comparison& comparison, std::ostream& out, const TextStyle& style) {
  const bool worse = comparison.has_worsened();
  out << painted(worse ? "WORSE" : "NO WORSE", worse ? Colour::bad : Colour::good, style) << ": "
      << counts_text(comparison) << '\n';
  write_paragraph(out, "Old: ", fmt::format("{} ({})", comparison.before_file, comparison.before_verdict),
                  style);
  write_paragraph(out, "New: ", fmt::format("{} ({})", comparison.after_file, comparison.after_verdict),
                  style);
  for (const std::string& setting : comparison.settings) write_paragraph(out, "Note: ", setting, style);
  std::vector<TableRow> rows;
  for (const ComparedFinding& one : comparison.findings) {
    if (one.change != Change::unchanged) rows.push_back(row(one));
  }
  if (!rows.empty()) {
    out << '\n';
    write_table(out, {"change", "finding", "path", "old", "new"}, rows, style);
  }
  out << '\n';
  write_paragraph(out, "Caution: ", caution(), style);
}

void write_comparison_json(const Comparison& comparison, std::ostream& out) {
  Json root;
  root["format"] = "pathvet-comparison";
  root["version"] = 1;
  root["caution"] = caution();
  root["old"] = {{"file", comparison.before_file}, {"verdict", comparison.before_verdict}};
  root["new"] = {{"file", comparison.after_file}, {"verdict", comparison.after_verdict}};
  root["worsened"] = comparison.has_worsened();
  for (Change change : changes) root["counts"][name(change)] = comparison.count(change);
  root["settings"] = comparison.settings;
  root["findings"] = Json::array();
  for (const ComparedFinding& one : comparison.findings) root["findings"].push_back(finding_json(one));
  out << text(root);
}

}  // namespace pathvet
