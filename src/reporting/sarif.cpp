#include "pathvet/reporting/sarif.hpp"

#include <algorithm>
#include <map>
#include <ostream>

#include "pathvet/reporting/caution.hpp"
#include "pathvet/reporting/messages.hpp"
#include "reporting/escapes.hpp"
#include "reporting/json_values.hpp"
#include "reporting/phrases.hpp"
#include "reporting/rules.hpp"
#include "reporting/units.hpp"

// Section numbers are those of the standard: Static Analysis Results Interchange Format 2.1.0, OASIS.
namespace pathvet {
namespace {

using namespace reporting;

const char* level_word(Code code) {
  return level(code) == Level::error ? "error" : "warning";
}

Json text_message(const std::string& text) {
  return {{"text", text}};
}

/// A reportingDescriptor (3.49).
Json rule_json(Code code) {
  Json out;
  out["id"] = name(code);
  out["shortDescription"] = text_message(rule(code).summary);
  out["fullDescription"] = text_message(std::string(rule(code).summary) + " " + rule(code).help);
  out["help"] = text_message(rule(code).help);
  out["defaultConfiguration"] = {{"level", level_word(code)}};
  return out;
}

Json tool_json(const Report& report) {
  Json driver;
  driver["name"] = "pathvet";
  driver["version"] = report.tool_version;
  driver["shortDescription"] = text_message("Vets robot paths offline.");
  driver["fullDescription"] = text_message(caution());
  driver["rules"] = Json::array();
  for (int i = 0; i < code_count; ++i) driver["rules"].push_back(rule_json(static_cast<Code>(i)));
  return {{"driver", std::move(driver)}};
}

Json physical_location(const PathResult& path, const SourcePlace& place) {
  Json out;
  out["artifactLocation"] = {{"uri", uri_of_file(path.file)}};
  // Lines and columns count from 1 (3.30.5, 3.30.6).
  if (place.line >= 1 && place.column >= 1) {
    out["region"] = {{"startLine", place.line}, {"startColumn", place.column}};
  }
  return out;
}

Json location_json(const PathResult& path, const SegmentResult& segment) {
  Json logical;
  logical["name"] = segment.from + " to " + segment.to;
  logical["fullyQualifiedName"] = path.name + "/" + segment.from + " to " + segment.to;
  logical["kind"] = "segment";
  Json out;
  out["physicalLocation"] = physical_location(path, segment.place);
  out["logicalLocations"] = Json::array({std::move(logical)});
  return out;
}

/// What a finding is known by in every run (3.27.17): nothing that an edit elsewhere in the file changes.
Json identity(const PathResult& path, const Finding& finding) {
  const SegmentResult& segment = segment_of(path, finding);
  return Json::array({name(finding.code), segment.from, segment.to, axis_name(path, finding.axis)});
}

std::string line_of(const Json& value) {
  return value.dump(-1, ' ', false, Json::error_handler_t::replace);
}

Json properties_json(const PathResult& path, const Finding& f) {
  Json out;
  out["path"] = path.name;
  out["segment"] = f.segment;
  out["joint"] = text_or_null(axis_name(path, f.axis));
  out["begin_mm"] = number(f.begin_length);
  out["end_mm"] = number(f.end_length);
  out["peak_mm"] = number(f.peak_length);
  out["begin_s"] = number(f.begin_time);
  out["end_s"] = number(f.end_time);
  out["peak_s"] = number(f.peak_time);
  out["value"] = f.unbounded ? Json(nullptr) : in_unit(f.value, f.quantity);
  out["limit"] = in_unit(f.limit, f.quantity);
  out["unit"] = unit(f.quantity);
  return out;
}

/// A result (3.27).
Json result_json(const PathResult& path, const Finding& finding, int occurrence) {
  Json fingerprint = identity(path, finding);
  fingerprint.push_back(occurrence);
  Json out;
  out["ruleId"] = name(finding.code);
  out["ruleIndex"] = static_cast<int>(finding.code);
  out["level"] = level_word(finding.code);
  std::string words = message(path, finding);
  if (const std::string help = remedy(path, finding); !help.empty()) words += " " + help;
  out["message"] = text_message(words);
  out["locations"] = Json::array({location_json(path, segment_of(path, finding))});
  out["partialFingerprints"] = {{"pathvetFinding/v1", line_of(fingerprint)}};
  out["properties"] = properties_json(path, finding);
  return out;
}

void add_results(Json& results, const PathResult& path) {
  std::map<std::string, int> seen;
  for (const Finding& finding : path.findings) {
    results.push_back(result_json(path, finding, ++seen[line_of(identity(path, finding))]));
  }
}

/// An invocation (3.20); what the check has to say about its own work goes into its notifications.
Json invocation_json(const Report& report) {
  Json notifications = Json::array();
  for (const PathResult& path : report.paths) {
    for (const std::string& note : path.notes) {
      Json place;
      place["physicalLocation"] = physical_location(path, {});
      notifications.push_back(
          {{"level", "note"}, {"message", text_message(note)}, {"locations", Json::array({place})}});
    }
  }
  const bool whole = std::ranges::none_of(report.paths, &PathResult::stopped);
  Json out;
  out["executionSuccessful"] = whole;
  out["exitCode"] = report.exit_status();
  out["toolExecutionNotifications"] = std::move(notifications);
  return out;
}

Json run_json(const Report& report) {
  Json out;
  out["tool"] = tool_json(report);
  out["invocations"] = Json::array({invocation_json(report)});
  out["columnKind"] = "unicodeCodePoints";
  out["results"] = Json::array();
  for (const PathResult& path : report.paths) add_results(out["results"], path);
  out["properties"] = {{"caution", caution()}, {"verdict", report.verdict()}, {"strict", report.strict}};
  return out;
}

}  // namespace

void write_sarif(const Report& report, std::ostream& out) {
  Json root;
  root["$schema"] =
      "https://docs.oasis-open.org/sarif/sarif/v2.1.0/errata01/os/schemas/sarif-schema-2.1.0.json";
  root["version"] = "2.1.0";
  root["runs"] = Json::array({run_json(report)});
  out << text(root);
}

}  // namespace pathvet
