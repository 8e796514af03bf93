// Every path of fixtures/paths shows what its name says: tests/checks/fixtures.txt tells what, and where the
// numbers are from.
#include <cmath>
#include <filesystem>
#include <fstream>
#include <set>
#include <sstream>
#include <string>
#include <vector>

#include <doctest/doctest.h>

#include "pathvet/checks/check_path.hpp"
#include "pathvet/xml/read.hpp"

namespace pathvet {
namespace {

constexpr double fraction_tolerance = 3e-4;  // the second program's coarsest steps
constexpr double value_tolerance = 2e-3;     // relative; its accelerations are differences
constexpr double zero_tolerance = 1e-6;      // of a value given as 0

struct Expected {
  int segment = 0;
  std::string code, axis;
  double begin = 0, end = 0;
  std::optional<double> value;
  std::string line;
};

struct Fixture {
  std::string file;
  std::vector<Expected> findings;
  bool more = false;
};

Expected expected_of(const std::string& text) {
  Expected expected;
  std::string value;
  std::istringstream words(text);
  words.imbue(std::locale::classic());
  words >> expected.segment >> expected.code >> expected.axis >> expected.begin >> expected.end >> value;
  REQUIRE(words);
  for (char& c : expected.axis) c = c == '_' ? ' ' : c;
  if (expected.axis == "-") expected.axis.clear();
  if (value != "none") expected.value = std::stod(value);
  expected.line = text;
  return expected;
}

std::vector<Fixture> read_fixtures() {
  std::ifstream input(std::string(PATHVET_SOURCE_DIR) + "/tests/checks/fixtures.txt");
  REQUIRE(input);
  std::vector<Fixture> fixtures;
  for (std::string line; std::getline(input, line);) {
    if (line.empty() || line.front() == '#') continue;
    const std::size_t colon = line.find(": ");
    REQUIRE(colon != std::string::npos);
    const std::string key = line.substr(0, colon);
    const std::string rest = line.substr(colon + 2);
    if (key == "path") {
      fixtures.push_back({rest, {}, false});
    } else if (key == "finding") {
      fixtures.back().findings.push_back(expected_of(rest));
    } else {
      REQUIRE(key == "more");
      fixtures.back().more = true;
    }
  }
  return fixtures;
}

/// A finding's value in the units of reports.
std::optional<double> shown_value(const Finding& finding) {
  if (!finding.value) return std::nullopt;
  switch (finding.quantity) {
    case Quantity::angle:
    case Quantity::angular_speed:
    case Quantity::angular_acceleration:
      return *finding.value * degrees_per_radian;
    default:
      return finding.value;
  }
}

std::string axis_name(const PathResult& result, const Finding& finding) {
  return finding.axis < 0 ? std::string() : result.axes[static_cast<std::size_t>(finding.axis)].name;
}

bool close_to(double actual, double expected) {
  if (expected == 0) return std::abs(actual) < zero_tolerance;
  return std::abs(actual - expected) < value_tolerance * std::abs(expected);
}

bool matches(const PathResult& result, const Finding& finding, const Expected& expected) {
  if (finding.segment != expected.segment || name(finding.code) != expected.code) return false;
  if (axis_name(result, finding) != expected.axis) return false;
  if (std::abs(finding.begin - expected.begin) > fraction_tolerance) return false;
  if (std::abs(finding.end - expected.end) > fraction_tolerance) return false;
  return !expected.value || (finding.value && close_to(*shown_value(finding), *expected.value));
}

std::string listing(const PathResult& result) {
  std::ostringstream text;
  for (const Finding& finding : result.findings) {
    text << "\n  " << finding.segment << ' ' << name(finding.code) << ' ' << axis_name(result, finding) << ' '
         << finding.begin << ' ' << finding.end << ' ' << shown_value(finding).value_or(NAN);
  }
  return text.str();
}

TEST_CASE("each fixture path shows what it is there for") {
  for (const Fixture& fixture : read_fixtures()) {
    CAPTURE(fixture.file);
    const auto reading = read_path(std::string(PATHVET_SOURCE_DIR) + "/fixtures/paths/" + fixture.file);
    for (const Fault& fault : reading.faults) FAIL_CHECK(to_string(fault));
    if (!reading.value) continue;
    const auto checked = check_path(reading.value->path, reading.value->cell, CheckOptions{});
    for (const Fault& fault : checked.faults) FAIL_CHECK(to_string(fault));
    if (!checked.value) continue;
    const PathResult& result = *checked.value;
    const std::string found = listing(result);
    CAPTURE(found);
    for (const Expected& expected : fixture.findings) {
      bool seen = false;
      for (const Finding& finding : result.findings) seen = seen || matches(result, finding, expected);
      CAPTURE(expected.line);
      CHECK(seen);
    }
    if (!fixture.more) CHECK(result.findings.size() == fixture.findings.size());
    CHECK(result.position_residual < 1e-3);
    CHECK(result.orientation_residual < 1e-4 * radians_per_degree);
  }
}

TEST_CASE("the list of fixtures is that of the folder, and every code but unproven is shown") {
  std::set<std::string> listed, codes;
  for (const Fixture& fixture : read_fixtures()) {
    listed.insert(fixture.file);
    for (const Expected& expected : fixture.findings) codes.insert(expected.code);
  }
  std::set<std::string> present;
  for (const auto& entry :
       std::filesystem::directory_iterator(std::string(PATHVET_SOURCE_DIR) + "/fixtures/paths")) {
    present.insert(entry.path().filename().string());
  }
  CHECK(listed == present);
  const std::set<std::string> wanted = {
      "branch-flip",  "joint-acceleration", "joint-jump",    "joint-limit",     "joint-speed",
      "limit-margin", "out-of-reach",       "singular-pass", "taught-mismatch", "speed-margin"};
  CHECK(codes == wanted);
}

}  // namespace
}  // namespace pathvet
