#include "xml/numbers.hpp"

#include <doctest/doctest.h>

namespace pathvet {
namespace {

using xml::parse_number;
using xml::parse_numbers;
using xml::Range;

TEST_CASE("numbers are decimal, a leading plus is fine") {
  const xml::Numbers numbers = parse_numbers("\t+1 -2.5\n.5 3. 1e3 -1E-2 +.25e+1 0\r");
  CHECK(numbers.problem == "");
  CHECK(numbers.values == std::vector<double>{1, -2.5, 0.5, 3, 1000, -0.01, 2.5, 0});
  CHECK(parse_numbers(" ").values.empty());
  CHECK(parse_number("0.1", Range::any).values[0] == 0.1);
}

TEST_CASE("what is no number, not finite or out of range is told") {
  struct Case {
    const char* text;
    const char* problem;
  };
  const std::vector<Case> cases{
      {"abc", "\"abc\" is not a number"},
      {"1 2x", "\"2x\" is not a number"},
      {"1,5", "\"1,5\" is not a number"},
      {"0x10", "\"0x10\" is not a number"},
      {"++1", "\"++1\" is not a number"},
      {"+-1", "\"+-1\" is not a number"},
      {"+", "\"+\" is not a number"},
      {"-", "\"-\" is not a number"},
      {"1e", "\"1e\" is not a number"},
      {"1\xC2\xA0"
       "2",
       "\"1\xC2\xA0"
       "2\" is not a number"},
      {"nan", "\"nan\" is not a finite number"},
      {"-inf", "\"-inf\" is not a finite number"},
      {"+Infinity", "\"+Infinity\" is not a finite number"},
      {"1e999", "\"1e999\" is out of the range of double precision"},
      {"-1e999", "\"-1e999\" is out of the range of double precision"},
      {"1e-999", "\"1e-999\" is out of the range of double precision"},
      {"1.1e15", "\"1.1e15\" is out of range; expected a number of at most 1e+15 in size"},
  };
  for (const Case& broken : cases) {
    CAPTURE(broken.text);
    CHECK(parse_numbers(broken.text).problem == broken.problem);
  }
}

TEST_CASE("one number in its range") {
  CHECK(parse_number("1 2", Range::any).problem == "\"1 2\" is not one number");
  CHECK(parse_number("", Range::any).problem == "\"\" is not one number");
  CHECK(parse_number("0", Range::positive).problem == "\"0\" is not above 0");
  CHECK(parse_number("-0", Range::positive).problem == "\"-0\" is not above 0");
  CHECK(parse_number("-1e-9", Range::not_negative).problem == "\"-1e-9\" is below 0");
  CHECK(parse_number("0", Range::not_negative).problem == "");
  CHECK(parse_number("1e-9", Range::positive).problem == "");
}

}  // namespace
}  // namespace pathvet
