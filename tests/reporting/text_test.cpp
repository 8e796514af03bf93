#include "pathvet/reporting/text.hpp"

#include <doctest/doctest.h>

#include <algorithm>
#include <sstream>

#include "pathvet/reporting/caution.hpp"
#include "reporting/layout.hpp"
#include "reporting/sample_result.hpp"

using namespace pathvet;

namespace {

std::string written(const Report& report, const TextStyle& style) {
  std::ostringstream out;
  write_text(report, out, style);
  return out.str();
}

/// Line breaks and runs of spaces as one space.
std::string flowed(const std::string& text) {
  std::istringstream words(text);
  std::string out, word;
  while (words >> word) out += (out.empty() ? "" : " ") + word;
  return out;
}

}  // namespace

TEST_CASE("a clear path, word by word") {
  const std::string text = written(sample::report(sample::empty_path()), {120, false, false});
  CHECK(text.substr(0, text.find("Caution")) ==
        "CLEAR: flange trim: nothing found\n"
        "path   flange-trim.xml\n"
        "cell   bracket cell (cells/bracket.xml), arm: arm on a track\n"
        "run    3 segments, 420.5 mm, 4.25 s; continuity proven on 100 % of it\n"
        "start  taught, branch +: a 100, J1 60, J2 -30\n"
        "\n"
        "#  segment  move    joint speed (! over)  worst  joint  holds to\n"
        "-  -------  ------  --------------------  -----  -----  --------\n"
        "1  A -> B   joint   .:=                    50 %  J1        100 %\n"
        "2  B -> C   linear  .:=                    50 %  J1      75 mm/s\n"
        "3  C -> D   turn    .:=                    50 %  J1\n"
        "\n");
}

TEST_CASE("a flagged path: verdict, findings, notes, caution") {
  const std::string text = written(sample::report(sample::full_path()), {80, false, true});
  CHECK(text.rfind("FLAGGED: flange trim: 7 errors, 5 warnings\n", 0) == 0);
  CHECK(text.find("B → C, line 5  error ") != std::string::npos);
  CHECK(text.find("37.5 to 75 mm") != std::string::npos);
  CHECK(text.find("note: The blend at B was cut to 5 mm") != std::string::npos);
  CHECK(flowed(text).ends_with(std::string("Caution: ") + caution()));
  for (int code = 0; code <= static_cast<int>(Code::unproven); ++code) {
    CHECK_MESSAGE(text.find(name(static_cast<Code>(code))) != std::string::npos,
                  name(static_cast<Code>(code)));
  }
  CHECK(text.find("error") < text.find("warning "));
  CHECK(text.find("taught-mismatch") < text.find("limit-margin"));
}

TEST_CASE("no line is wider than asked for, and none ends in spaces") {
  for (int width : {60, 80, 120, 200}) {
    std::istringstream lines(written(sample::report(sample::full_path()), {width, false, true}));
    for (std::string line; std::getline(lines, line);) {
      CAPTURE(line);
      CHECK(reporting::width_of(line) <= width);
      CHECK((line.empty() || line.back() != ' '));
    }
  }
}

TEST_CASE("colour adds to the words, never replaces them") {
  const Report report = sample::report(sample::full_path());
  const std::string coloured = written(report, {80, true, false});
  std::string bare;
  for (std::size_t i = 0; i < coloured.size(); ++i) {
    if (coloured[i] == '\033') i = coloured.find('m', i) + 1;
    bare += coloured[i];
  }
  CHECK(coloured.find('\033') != std::string::npos);
  CHECK(bare == written(report, {80, false, false}));
}

TEST_CASE("plain text is ASCII") {
  const std::string text = written(sample::report(sample::full_path()), {80, false, false});
  CHECK(std::ranges::all_of(text, [](char letter) { return static_cast<unsigned char>(letter) < 128; }));
}

TEST_CASE("several paths have a verdict over all") {
  Report report = sample::report(sample::empty_path());
  report.paths.push_back(sample::full_path());
  const std::string text = written(report, {80, false, false});
  CHECK(text.rfind("FLAGGED: 1 of 2 paths flagged; 7 errors, 5 warnings\n", 0) == 0);
  CHECK(text.find("CLEAR: flange trim") != std::string::npos);
}

TEST_CASE("a long list is cut, and says so") {
  PathResult path = sample::empty_path();
  path.findings.assign(100, sample::speed_finding());
  path.segments.resize(60, path.segments[1]);
  const std::string text = written(sample::report(path), {120, false, false});
  CHECK(text.find("... and 60 more: --json lists all.") != std::string::npos);
  CHECK(text.find("... and 60 segments not shown: --json lists all.") != std::string::npos);
}
