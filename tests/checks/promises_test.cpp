// What the contract promises of every path: nothing is missed between samples, and the number of threads
// changes nothing.
#include <algorithm>
#include <cmath>
#include <filesystem>
#include <string>
#include <vector>

#include <doctest/doctest.h>

#include "pathvet/checks/check_path.hpp"
#include "pathvet/xml/read.hpp"

namespace pathvet {
namespace {

constexpr double length_promise = 0.01;                      // mm that begin or end may move by
constexpr double angle_promise = 0.01 * radians_per_degree;  // the same on a turn on the spot
constexpr double value_promise = 1e-4;                       // relative

std::vector<std::string> fixture_paths() {
  std::vector<std::string> files;
  for (const auto& entry :
       std::filesystem::directory_iterator(std::string(PATHVET_SOURCE_DIR) + "/fixtures/paths")) {
    files.push_back(entry.path().string());
  }
  std::sort(files.begin(), files.end());
  return files;
}

PathResult result_of(const PathAndCell& input, const CheckOptions& options) {
  auto checked = check_path(input.path, input.cell, options);
  REQUIRE(checked.value);
  return *checked.value;
}

/// How far a place moved, as a share of what is promised.
double moved(const SegmentResult& segment, double fraction, double other) {
  const double way =
      segment.turn_on_the_spot ? segment.turn / angle_promise : segment.length / length_promise;
  return std::abs(fraction - other) * way;
}

void check_same(const PathResult& coarse, const PathResult& fine) {
  REQUIRE(coarse.findings.size() == fine.findings.size());
  for (std::size_t i = 0; i < coarse.findings.size(); ++i) {
    const Finding& a = coarse.findings[i];
    const Finding& b = fine.findings[i];
    const SegmentResult& segment = coarse.segments[static_cast<std::size_t>(a.segment - 1)];
    CAPTURE(i);
    CAPTURE(name(a.code));
    CHECK(a.code == b.code);
    CHECK(a.segment == b.segment);
    CHECK(a.axis == b.axis);
    CHECK(moved(segment, a.begin, b.begin) < 1);
    CHECK(moved(segment, a.end, b.end) < 1);
    REQUIRE(a.value.has_value() == b.value.has_value());
    // An exact pass has no size to measure its smallest singular value by.
    if (a.value) CHECK(std::abs(*a.value - *b.value) <= value_promise * std::abs(*a.value) + 1e-6);
  }
}

TEST_CASE("steps ten times finer bring no new finding and move none") {
  for (const std::string& file : fixture_paths()) {
    CAPTURE(file);
    const auto reading = read_path(file);
    REQUIRE(reading.value);
    CheckOptions fine;
    fine.step_length /= 10;
    fine.step_angle /= 10;
    check_same(result_of(*reading.value, CheckOptions{}), result_of(*reading.value, fine));
  }
}

TEST_CASE("steps ten times coarser bring nothing else either") {
  for (const std::string& file : fixture_paths()) {
    CAPTURE(file);
    const auto reading = read_path(file);
    REQUIRE(reading.value);
    CheckOptions coarse;
    coarse.step_length *= 10;
    coarse.step_angle *= 10;
    check_same(result_of(*reading.value, coarse), result_of(*reading.value, CheckOptions{}));
  }
}

TEST_CASE("any number of threads gives the same numbers to the last bit") {
  for (const std::string& file : fixture_paths()) {
    CAPTURE(file);
    const auto reading = read_path(file);
    REQUIRE(reading.value);
    CheckOptions threaded;
    threaded.threads = 4;
    const PathResult one = result_of(*reading.value, CheckOptions{});
    const PathResult four = result_of(*reading.value, threaded);
    REQUIRE(one.findings.size() == four.findings.size());
    CHECK(one.samples == four.samples);
    CHECK(one.position_residual == four.position_residual);
    CHECK(one.proven_fraction == four.proven_fraction);
    for (std::size_t i = 0; i < one.findings.size(); ++i) {
      CHECK(one.findings[i].begin == four.findings[i].begin);
      CHECK(one.findings[i].end == four.findings[i].end);
      CHECK(one.findings[i].peak == four.findings[i].peak);
      CHECK(one.findings[i].value == four.findings[i].value);
      CHECK(one.findings[i].joints == four.findings[i].joints);
    }
  }
}

}  // namespace
}  // namespace pathvet
