#include "pathvet/reporting/json.hpp"

#include <doctest/doctest.h>

#include <fstream>
#include <limits>
#include <nlohmann/json.hpp>
#include <sstream>

#include "reporting/sample_result.hpp"

using namespace pathvet;
using Json = nlohmann::ordered_json;

namespace {

std::string written(const Report& report) {
  std::ostringstream out;
  write_json(report, out);
  return out.str();
}

Json read_back(const Report& report) {
  return Json::parse(written(report));
}

std::string members(const Json& object) {
  std::string names;
  for (const auto& member : object.items()) names += member.key() + ' ';
  return names;
}

}  // namespace

// expected/report.json is what the writer made, looked through by hand against the contract; it is also what
// the schema test reads.
TEST_CASE("the report of a hand-made result, byte by byte") {
  std::ifstream file(PATHVET_SOURCE_DIR "/tests/reporting/expected/report.json");
  std::ostringstream expected;
  expected << file.rdbuf();
  CHECK(written(sample::report(sample::full_path())) == expected.str());
}

TEST_CASE("members come in the contract's order") {
  const Json root = read_back(sample::report(sample::full_path()));
  CHECK(members(root) == "format version tool_version caution settings verdict errors warnings paths ");
  CHECK(members(root["settings"]) ==
        "step_mm step_deg limit_margin_deg limit_margin_mm speed_margin singular_below ");
  const Json& path = root["paths"][0];
  CHECK(members(path) ==
        "file name cell_file cell arm characteristic_length_mm verdict errors warnings start joints totals "
        "segments "
        "findings notes ");
  CHECK(members(path["start"]) == "joints branch origin ");
  CHECK(members(path["joints"][0]) ==
        "name unit lower upper speed_limit min max peak_speed peak_ratio travel ");
  CHECK(members(path["totals"]) ==
        "length_mm duration_s samples proven_fraction position_residual_mm orientation_residual_deg ");
  CHECK(members(path["segments"][0])
            .rfind("index from to move line length_mm turn_deg duration_s samples branch "
                   "peak_ratio peak_joint min_singular_value limit_margin "
                   "limit_margin_joint highest_speed findings ",
                   0) == 0);
  const std::string finding =
      "index code level segment from to line joint begin end peak begin_mm end_mm peak_mm begin_s end_s "
      "peak_s value "
      "limit unit joints position quaternion message remedy ";
  const Json& findings = path["findings"];
  CHECK(members(findings[3]) == finding + "from_joints to_joints from_branch to_branch column ");
  CHECK(members(findings[4]) == finding + "column ");
  CHECK(members(findings[5]) == finding + "ratio helpful_speed column ");
  CHECK(members(findings[7]) == finding + "position_miss_mm orientation_miss_deg column ");
  CHECK(members(findings[8]) == finding + "kind nearness nearness_unit runaway_joints lost_motion column ");
}

TEST_CASE("values are in user units and keep their sign") {
  const Json path = read_back(sample::report(sample::full_path()))["paths"][0];
  const Json& speed = path["findings"][5];
  CHECK(speed["value"] == -450);
  CHECK(speed["limit"] == -360);
  CHECK(speed["unit"] == "deg/s");
  CHECK(speed["joints"] == Json({200, 45, -15}));
  CHECK(path["start"]["joints"] == Json({100, 60, -30}));
  CHECK(path["joints"][0]["unit"] == "mm");
  CHECK(path["joints"][1]["upper"] == 170);
  CHECK(path["joints"][3]["speed_limit"].is_null());
  CHECK(path["segments"][0]["highest_speed"] == 100);
  CHECK(path["segments"][1]["highest_speed"] == 75);
  CHECK(path["segments"][2]["highest_speed"].is_null());
  CHECK(path["segments"][2]["limit_margin"] == 12);
  CHECK(path["findings"][8]["runaway_joints"][0]["joint"] == "J1");
}

TEST_CASE("what has no value is null") {
  PathResult path = sample::empty_path();
  Finding f = sample::speed_finding();
  f.unbounded = true;
  path.findings = {f};
  path.segments[1].peak_ratio = std::numeric_limits<double>::infinity();
  path.segments[1].peak_axis = -1;
  path.segments[1].min_singular_value.reset();
  path.segments[1].limit_margin.reset();
  path.segments[1].limit_margin_axis = -1;
  const Json read = read_back(sample::report(path))["paths"][0];
  CHECK(read["findings"][0]["value"].is_null());
  CHECK(read["findings"][0]["ratio"].is_null());
  for (const char* member :
       {"peak_ratio", "peak_joint", "min_singular_value", "limit_margin", "limit_margin_joint"}) {
    CHECK_MESSAGE(read["segments"][1][member].is_null(), member);
  }
}

TEST_CASE("numbers read back to the same double") {
  PathResult path = sample::empty_path();
  for (double value :
       {0.1, 1.0 / 3, 5e-324, 1.7976931348623157e308, 123456789.123456789, 9007199254740993.0}) {
    path.length = value;
    CHECK(read_back(sample::report(path))["paths"][0]["totals"]["length_mm"].get<double>() == value);
  }
}

TEST_CASE("a file name that is no UTF-8 still makes a report") {
  PathResult path = sample::empty_path();
  path.file = "caf\xe9.xml";
  CHECK(read_back(sample::report(path))["paths"][0]["file"] == "caf\xef\xbf\xbd.xml");
}

TEST_CASE("the reduced speed stands at the end of the settings if it was asked for") {
  Report report = sample::report(sample::empty_path());
  report.options.reduced_speed = 250;
  const Json settings = read_back(report)["settings"];
  CHECK(settings["reduced_speed"] == 250);
  CHECK(members(settings).ends_with("singular_below reduced_speed "));
}

TEST_CASE("verdict and exit status") {
  Report clear = sample::report(sample::empty_path());
  CHECK(std::string(clear.verdict()) == "clear");
  CHECK(clear.exit_status() == 0);
  PathResult warned = sample::empty_path();
  warned.findings = {sample::singular_finding()};
  Report warning = sample::report(warned);
  CHECK(warning.exit_status() == 0);
  CHECK(warning.warnings() == 1);
  warning.strict = true;
  CHECK(warning.exit_status() == 1);
  CHECK(std::string(warning.verdict(warning.paths[0])) == "flagged");
  warning.strict = false;
  warning.paths.push_back(sample::full_path());
  CHECK(warning.exit_status() == 1);
  CHECK(warning.errors() == 7);
  CHECK(std::string(warning.verdict(warning.paths[0])) == "clear");
}
