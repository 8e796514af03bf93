#include "reporting/layout.hpp"

#include <doctest/doctest.h>

#include <sstream>

#include "reporting/strip.hpp"

using namespace pathvet;
using namespace pathvet::reporting;

namespace {

int widest_line(const std::string& text) {
  int widest = 0;
  for (const std::string& line : wrapped(text, 1 << 20)) widest = std::max(widest, width_of(line));
  return widest;
}

}  // namespace

TEST_CASE("text wraps at spaces, and inside words that are too long") {
  CHECK(wrapped("one two three", 7) == std::vector<std::string>{"one two", "three"});
  CHECK(wrapped("abcdefgh ij", 5) == std::vector<std::string>{"abcde", "fgh", "ij"});
  CHECK(wrapped("one\ntwo", 20) == std::vector<std::string>{"one", "two"});
  CHECK(wrapped("", 5) == std::vector<std::string>{""});
  CHECK(wrapped("ä→ü ö", 3) == std::vector<std::string>{"ä→ü", "ö"});
}

TEST_CASE("control characters do not reach the terminal") {
  CHECK(wrapped("a\033[31mb\tc", 20) == std::vector<std::string>{"a?[31mb?c"});
}

TEST_CASE("a table keeps to the width") {
  const std::vector<TableRow> rows = {
      {{"A -> B"},
       {"error", Colour::bad},
       {"a rather long message that has to be wrapped into several lines"}},
      {{"B -> a_very_long_name_of_a_waypoint_without_any_space"}, {"warning"}, {"short"}}};
  for (int width : {40, 60, 80, 120}) {
    std::ostringstream out;
    write_table(out, {"where", "what", "how bad"}, rows, {width, false, false});
    CHECK(widest_line(out.str()) <= width);
  }
}

TEST_CASE("a table's cells stand under their titles") {
  std::ostringstream out;
  write_table(out, {"#", "joint"},
              {{{"1", Colour::none, true}, {"J1 turns"}}, {{"10", Colour::none, true}, {"J2"}}},
              {80, false, false});
  CHECK(out.str() == " #  joint\n--  --------\n 1  J1 turns\n10  J2\n");
}

TEST_CASE("colours only where the style has them") {
  CHECK(painted("error", Colour::bad, {80, false, false}) == "error");
  CHECK(painted("error", Colour::bad, {80, true, false}) == "\033[1;31merror\033[0m");
  CHECK(painted("error", Colour::none, {80, true, false}) == "error");
}

TEST_CASE("a strip shows the worst of each stretch, and '!' above the limit") {
  CHECK(strip({0, 0.125, 0.126, 0.5, 1, 1.001}, 10, false) == "..:=#!");
  CHECK(strip({0, 0.5, 1}, 10, true) == "▁▄█");
  CHECK(strip({0.1, 1.5, 0.1, 0.6}, 2, false) == "!+");
  CHECK(strip({NAN, 0.1}, 1, false) == "!");
  CHECK(strip({}, 10, false).empty());
}
