#include "pathvet/reporting/compare.hpp"

#include <doctest/doctest.h>

#include <nlohmann/json.hpp>
#include <sstream>

#include "pathvet/reporting/caution.hpp"
#include "pathvet/reporting/json.hpp"
#include "reporting/sample_result.hpp"

using namespace pathvet;

namespace {

std::string json(const Report& report) {
  std::ostringstream out;
  write_json(report, out);
  return out.str();
}

SavedReport saved(const PathResult& path) {
  const Reading<SavedReport> reading = read_saved_report("r.json", json(sample::report(path)));
  REQUIRE(reading.value);
  return *reading.value;
}

/// "new joint-speed" and so on, what is unchanged left out.
std::vector<std::string> changes(const PathResult& before, const PathResult& after) {
  std::vector<std::string> out;
  for (const ComparedFinding& one : compare_reports(saved(before), saved(after)).findings) {
    if (one.change == Change::unchanged) continue;
    out.push_back(std::string(name(one.change)) + " " + (one.after ? one.after : one.before)->code);
  }
  return out;
}
using Words = std::vector<std::string>;

PathResult with(const std::vector<Finding>& findings) {
  PathResult path = sample::empty_path();
  path.segments[0].length = 100;
  path.segments[2].length = 0;
  path.findings = findings;
  return path;
}

/// B-C of 150 mm becomes B-B.1 of 50 mm and B.1-C of 100 mm.
PathResult split(std::vector<Finding> findings) {
  PathResult path = with(findings);
  SegmentResult half = path.segments[1];
  path.segments[1].to = half.from = "B.1";
  path.segments[1].length = 50;
  half.length = 100;
  path.segments.insert(path.segments.begin() + 2, half);
  for (std::size_t i = 0; i < path.segments.size(); ++i) path.segments[i].index = static_cast<int>(i) + 1;
  return path;
}

Finding stretch(int segment, double begin, double end, double from_mm, double to_mm) {
  Finding f = sample::speed_finding();
  f.segment = segment;
  f.begin = begin;
  f.end = end;
  f.begin_length = from_mm;
  f.end_length = to_mm;
  return f;
}

std::string place_of_fault(const std::string& text) {
  const Reading<SavedReport> reading = read_saved_report("old.json", text);
  CHECK(!reading.value);
  REQUIRE(reading.faults.size() == 1);
  return to_string(reading.faults[0]);
}

}  // namespace

TEST_CASE("compare: a report with itself has nothing new") {
  const Comparison same = compare_reports(saved(sample::full_path()), saved(sample::full_path()));
  CHECK(same.count(Change::unchanged) == 12);
  CHECK(!same.has_worsened());
  CHECK(same.settings.empty());
}

TEST_CASE("compare: new and fixed, also by joint and by waypoint") {
  const Finding fast = sample::speed_finding();
  CHECK(changes(with({}), with({fast})) == Words{"new joint-speed"});
  CHECK(changes(with({fast}), with({})) == Words{"fixed joint-speed"});
  Finding other = fast;
  other.axis = 1;
  CHECK(changes(with({fast}), with({other})) == Words{"new joint-speed", "fixed joint-speed"});
  other = fast;
  other.segment = 1;
  CHECK(changes(with({fast}), with({other})) == Words{"new joint-speed", "fixed joint-speed"});
}

TEST_CASE("compare: worse and better in the measure of each code") {
  for (const Finding& f : sample::full_path().findings) {
    if (!f.value) continue;
    // Nearer to a limit and more singular is worse where a small value is what is flagged.
    const bool small_is_bad = f.code == Code::limit_margin || f.code == Code::singular_pass;
    Finding grown = f;
    grown.value = *f.value * 1.1;
    grown.ratio = f.ratio * 1.1;
    CAPTURE(name(f.code));
    const Words up = changes(with({f}), with({grown})), down = changes(with({grown}), with({f}));
    CHECK(up == Words{std::string(small_is_bad ? "better " : "worse ") + name(f.code)});
    CHECK(down == Words{std::string(small_is_bad ? "worse " : "better ") + name(f.code)});
  }
  Finding unbounded = sample::speed_finding();
  unbounded.unbounded = true;
  CHECK(changes(with({sample::speed_finding()}), with({unbounded})) == Words{"worse joint-speed"});
  CHECK(changes(with({unbounded}), with({unbounded})).empty());
  Finding hardly = sample::speed_finding();
  hardly.ratio *= 1.0005;
  CHECK(changes(with({sample::speed_finding()}), with({hardly})).empty());
}

TEST_CASE("compare: moved by more than a millimetre") {
  const Finding here = stretch(2, 0.2, 0.4, 30, 60);
  CHECK(changes(with({here}), with({stretch(2, 0.204, 0.404, 30.6, 60.6)})).empty());
  CHECK(changes(with({here}), with({stretch(2, 0.3, 0.5, 45, 75)})) == Words{"moved joint-speed"});
}

TEST_CASE("compare: a waypoint put in changes nothing that stays where it was") {
  const Finding late = stretch(2, 0.5, 0.7, 75, 105);
  CHECK(changes(with({late}), split({stretch(3, 0.25, 0.55, 25, 55)})).empty());
  CHECK(changes(split({stretch(3, 0.25, 0.55, 25, 55)}), with({late})).empty());
  // What lies across the new waypoint is two findings of one kind now.
  const Finding across = stretch(2, 0.2, 0.6, 30, 90);
  const PathResult two = split({stretch(2, 0.6, 1, 30, 50), stretch(3, 0, 0.4, 0, 40)});
  CHECK(changes(with({across}), two).empty());
  CHECK(changes(two, with({across})).empty());
  // With a gap they are two indeed.
  const PathResult apart = split({stretch(2, 0.6, 0.9, 30, 45), stretch(3, 0, 0.4, 0, 40)});
  CHECK(changes(with({across}), apart) == Words{"new joint-speed", "moved joint-speed"});
}

TEST_CASE("compare: the nearest of several are the same") {
  const Finding first = stretch(2, 0.1, 0.2, 15, 30), second = stretch(2, 0.6, 0.7, 90, 105);
  const Comparison found = compare_reports(saved(with({first, second})), saved(with({second})));
  REQUIRE(found.findings.size() == 2);
  CHECK(found.findings[0].change == Change::fixed);
  CHECK(found.findings[0].before->begin_mm == 15);
}

TEST_CASE("compare: several paths by their file, then by their name") {
  Report before = sample::report(with({sample::speed_finding()})), after = before;
  PathResult other = with({});
  other.file = other.name = "other.xml";
  before.paths.push_back(other);
  after.paths.insert(after.paths.begin(), other);
  after.paths[1].file = "renamed.xml";
  const Comparison found = compare_reports(*read_saved_report("a", json(before)).value,
                                           *read_saved_report("b", json(after)).value);
  REQUIRE(found.findings.size() == 1);
  CHECK(found.findings[0].change == Change::unchanged);
  CHECK(found.findings[0].path == "renamed.xml");
}

TEST_CASE("compare: other settings are told") {
  Report after = sample::report(with({}));
  after.options.step_length = 2;
  const Comparison found = compare_reports(saved(with({})), *read_saved_report("b", json(after)).value);
  CHECK(found.settings == Words{"the older report was checked with step_mm = 1",
                                "the newer report was checked with step_mm = 2"});
}

TEST_CASE("compare: what is no report is told with its place") {
  CHECK(place_of_fault("{\n  \"a\": \xC3\xA4}").rfind("old.json:2:8: error: this is no JSON; expected", 0) ==
        0);
  CHECK(place_of_fault("").rfind("old.json:1:1: error: this is no JSON", 0) == 0);
  CHECK(place_of_fault("[1e999]").rfind("old.json:1:1: error: a number is too large", 0) == 0);
  CHECK(place_of_fault("[]").find("this is no pathvet report: the whole is no object") != std::string::npos);
  CHECK(place_of_fault("{}").find("/format is missing") != std::string::npos);
  CHECK(place_of_fault(R"({"format": "pathvet-starts"})").find("/format is not") != std::string::npos);
  nlohmann::json broken = nlohmann::json::parse(json(sample::report(sample::full_path())));
  broken["paths"][0]["findings"][3]["segment"] = 4;
  CHECK(place_of_fault(broken.dump()).find("/paths/0/findings/3/segment is not in 0 to 3") !=
        std::string::npos);
  broken["paths"][0]["findings"][3].erase("segment");
  CHECK(place_of_fault(broken.dump()).find("/paths/0/findings/3/segment is missing") != std::string::npos);
}

TEST_CASE("compare: text and JSON say the same, with the caution") {
  const Comparison found = compare_reports(saved(with({})), saved(with({sample::speed_finding()})));
  std::ostringstream text, data;
  write_comparison_text(found, text, {200, false, false});
  CHECK(text.str().rfind("WORSE: 1 new, 0 worse, 0 moved, 0 better, 0 fixed, 0 unchanged\n", 0) == 0);
  CHECK(text.str().find("joint-speed J2") != std::string::npos);
  CHECK(text.str().find("B to C, -450 (limit -360) deg/s") != std::string::npos);
  CHECK(text.str().find("no permission to run") != std::string::npos);
  write_comparison_json(found, data);
  const auto root = nlohmann::json::parse(data.str());
  CHECK(root["caution"] == caution());
  CHECK(root["worsened"] == true);
  CHECK(root["counts"]["new"] == 1);
  CHECK(root["findings"][0]["old"].is_null());
  CHECK(root["findings"][0]["new"]["to"] == "C");
}
