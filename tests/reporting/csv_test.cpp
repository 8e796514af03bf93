#include "pathvet/reporting/csv.hpp"

#include <doctest/doctest.h>

#include <sstream>
#include <vector>

#include "pathvet/reporting/caution.hpp"
#include "reporting/sample_result.hpp"

using namespace pathvet;

namespace {

using Rows = std::vector<std::vector<std::string>>;

/// RFC 4180, read back.
Rows read(const std::string& text) {
  Rows rows{{""}};
  bool quoted = false;
  for (std::size_t i = 0; i < text.size(); ++i) {
    std::string& field = rows.back().back();
    if (quoted) {
      if (text[i] != '"') {
        field += text[i];
      } else if (text[i + 1] == '"') {
        field += text[++i];
      } else {
        quoted = false;
      }
    } else if (text[i] == '"') {
      CHECK(field.empty());
      quoted = true;
    } else if (text[i] == ',') {
      rows.back().emplace_back();
    } else if (text[i] == '\r') {
      REQUIRE(text[++i] == '\n');
      rows.push_back({""});
    } else {
      CHECK(text[i] != '\n');
      field += text[i];
    }
  }
  CHECK(rows.back() == std::vector<std::string>{""});
  rows.pop_back();
  return rows;
}

Rows csv(const PathResult& path) {
  std::ostringstream out;
  write_csv(sample::report(path), out);
  return read(out.str());
}

}  // namespace

TEST_CASE("CSV: a header, a row a finding, the caution last, all of one length") {
  const Rows rows = csv(sample::full_path());
  REQUIRE(rows.size() == 14);
  for (const auto& row : rows) CHECK(row.size() == 22);
  CHECK(rows[0][0] == "row");
  CHECK(rows[13][0] == "caution");
  CHECK(rows[0][20] == "message");
  CHECK(rows[13][20] == caution());
  const std::vector<std::string> start(rows[6].begin(), rows[6].begin() + 20);
  CHECK(start == std::vector<std::string>{
                     "finding",     "flange-trim.xml", "flange trim", "2",      "B",    "C",     "5",    "5",
                     "joint-speed", "error",           "J2",          "-450",   "-360", "deg/s", "37.5", "75",
                     "56.25",       "0.3125",          "0.625",       "0.46875"});
  CHECK(rows[4][11].empty());  // a jump has no value
  CHECK(csv(sample::empty_path()).size() == 2);
}

TEST_CASE("CSV: quotes and line breaks survive, no text is taken for a formula") {
  PathResult path = sample::full_path();
  path.name = "say \"hi\",\r\nthen go";
  path.axes[2].name = "J2, left";
  for (const char* id : {"=1+1", "+1", "-1", "@x", "\tx", "\rx",
                         "\xEF\xBC\x9D"
                         "1"}) {
    path.segments[1].from = id;
    const Rows rows = csv(path);
    CHECK(rows[6][2] == path.name);
    CHECK(rows[6][10] == "J2, left");
    CHECK(rows[6][4] == "'" + std::string(id));
  }
  path.segments[1].from = "a=1";
  CHECK(csv(path)[6][4] == "a=1");
}
