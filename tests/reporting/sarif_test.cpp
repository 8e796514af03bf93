#include "pathvet/reporting/sarif.hpp"

#include <doctest/doctest.h>

#include <nlohmann/json.hpp>
#include <set>
#include <sstream>

#include "pathvet/reporting/caution.hpp"
#include "reporting/sample_result.hpp"

// Members that are asked for: the schema of SARIF 2.1.0 (OASIS, sarif-schema-2.1.0.json) as published.
using namespace pathvet;
using Json = nlohmann::json;

namespace {

Json sarif(const Report& report) {
  std::ostringstream out;
  write_sarif(report, out);
  return Json::parse(out.str());
}

std::vector<std::string> fingerprints(const Json& log) {
  std::vector<std::string> all;
  for (const Json& result : log["runs"][0]["results"]) {
    all.push_back(result["partialFingerprints"]["pathvetFinding/v1"]);
  }
  return all;
}

}  // namespace

TEST_CASE("SARIF: one run with a rule for each code, and what the standard requires") {
  const Json log = sarif(sample::report(sample::full_path()));
  CHECK(log["version"] == "2.1.0");
  REQUIRE(log["runs"].size() == 1);
  const Json& run = log["runs"][0];
  const Json& driver = run["tool"]["driver"];
  CHECK(driver["name"] == "pathvet");
  CHECK(driver["fullDescription"]["text"] == caution());
  CHECK(run["properties"]["caution"] == caution());
  CHECK(run["columnKind"] == "unicodeCodePoints");
  CHECK(run["invocations"][0]["executionSuccessful"] == true);
  CHECK(run["invocations"][0]["exitCode"] == 1);
  CHECK(run["invocations"][0]["toolExecutionNotifications"][0]["message"]["text"] ==
        "The blend at B was cut to 5 mm, half of the segment A-B.");
  REQUIRE(driver["rules"].size() == 12);
  std::set<std::string> texts;
  for (const Json& rule : driver["rules"]) {
    texts.insert(rule["id"].get<std::string>());
    texts.insert(rule["shortDescription"]["text"].get<std::string>());
    texts.insert(rule["help"]["text"].get<std::string>());
  }
  CHECK(texts.size() == 36);
}

TEST_CASE("SARIF: a result has its rule, level, place and message") {
  const Json log = sarif(sample::report(sample::full_path()));
  const Json& run = log["runs"][0];
  const Json& results = run["results"];
  REQUIRE(results.size() == 12);
  for (std::size_t i = 0; i < results.size(); ++i) {
    const Json& rule = run["tool"]["driver"]["rules"][results[i]["ruleIndex"].get<std::size_t>()];
    CHECK(rule["id"] == results[i]["ruleId"]);
    CHECK(rule["defaultConfiguration"]["level"] == results[i]["level"]);
    CHECK(!results[i]["message"]["text"].get<std::string>().empty());
  }
  CHECK(results[5]["ruleId"] == "joint-speed");
  CHECK(results[5]["level"] == "error");
  CHECK(results[0]["level"] == "warning");
  CHECK(results[5]["properties"]["value"] == -450);
  const Json& place = results[5]["locations"][0];
  CHECK(place["physicalLocation"]["artifactLocation"]["uri"] == "flange-trim.xml");
  CHECK(place["physicalLocation"]["region"] == Json({{"startLine", 5}, {"startColumn", 5}}));
  CHECK(place["logicalLocations"][0]["name"] == "B to C");
}

TEST_CASE("SARIF: fingerprints are apart within a path, and stay when lines and values change") {
  PathResult path = sample::full_path();
  path.findings.insert(path.findings.begin() + 6, path.findings[5]);
  const auto before = fingerprints(sarif(sample::report(path)));
  CHECK(std::set(before.begin(), before.end()).size() == 13);
  CHECK(before[5] == R"(["joint-speed","B","C","J2",1])");
  CHECK(before[6] == R"(["joint-speed","B","C","J2",2])");
  for (SegmentResult& segment : path.segments) segment.place = {segment.place.line + 10, 1};
  for (Finding& finding : path.findings) {
    finding.begin /= 2;
    if (finding.value) finding.value = *finding.value * 1.01;
  }
  CHECK(fingerprints(sarif(sample::report(path))) == before);
}

TEST_CASE("SARIF: file names become URI references, a place that isn't known is left out") {
  PathResult path = sample::full_path();
  path.file = "my paths/100%\xC3\xA9:\xFF.xml";
  path.segments[1].place = {0, 0};
  Json place = sarif(sample::report(path))["runs"][0]["results"][0]["locations"][0]["physicalLocation"];
  CHECK(place["artifactLocation"]["uri"] == "my%20paths/100%25%C3%A9%3A%FF.xml");
  CHECK(!place.contains("region"));
  path.file = "/cells/a.xml";
  place = sarif(sample::report(path))["runs"][0]["results"][0]["locations"][0]["physicalLocation"];
  CHECK(place["artifactLocation"]["uri"] == "file:///cells/a.xml");
}

TEST_CASE("SARIF: a clear path has an empty list of results, one that was stopped no success") {
  PathResult path = sample::empty_path();
  CHECK(sarif(sample::report(path))["runs"][0]["results"] == Json::array());
  CHECK(sarif(sample::report(path))["runs"][0]["invocations"][0]["exitCode"] == 0);
  path.stopped = true;
  CHECK(sarif(sample::report(path))["runs"][0]["invocations"][0]["executionSuccessful"] == false);
}
