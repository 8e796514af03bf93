#include "xml/fault_list.hpp"

#include <doctest/doctest.h>

#include "broken_inputs.hpp"

namespace pathvet {
namespace {

TEST_CASE("a fault reads as compilers' do") {
  CHECK(to_string({"cells/a.xml", {3, 14}, "no <arm>"}) == "cells/a.xml:3:14: error: no <arm>");
}

TEST_CASE("faults come in the order of their places, at one place as they were added") {
  xml::FaultList faults;
  faults.add(4, "d");
  faults.add(1, "b");
  faults.add(4, "e");
  faults.add(0, "a");
  CHECK(test::listed(faults.in_order("f", "x\nyyyyy")) == "1:1: a\n1:2: b\n2:3: d\n2:3: e");
}

TEST_CASE("a hundred faults are listed, whichever way they come, and the rest counted") {
  constexpr std::size_t count = 1234;
  const std::string text(count, '\n');
  for (const bool backwards : {false, true}) {
    CAPTURE(backwards);
    xml::FaultList faults;
    for (std::size_t i = 0; i < count; ++i) faults.add(backwards ? count - 1 - i : i, "f");
    CHECK(faults.count() == count);
    const std::vector<Fault> listed = faults.in_order("f", text);
    REQUIRE(listed.size() == 101);
    for (int i = 0; i < 100; ++i) CHECK(listed[static_cast<std::size_t>(i)].place.line == i + 1);
    CHECK(listed[100].place.line == 101);
    CHECK(listed[100].what == "and 1134 more from here on; the file has 1234 faults in all");
  }
}

TEST_CASE("exactly a hundred faults need no closing word") {
  xml::FaultList faults;
  for (std::size_t i = 0; i < 100; ++i) faults.add(i, "f");
  CHECK(faults.in_order("f", std::string(100, ' ')).size() == 100);
  faults.add(100, "f");
  CHECK(faults.in_order("f", std::string(101, ' ')).back().what ==
        "and 1 more from here on; the file has 101 faults in all");
}

TEST_CASE("places may be asked for in any order") {
  xml::PlaceFinder finder("ab\ncd");
  CHECK(finder.at(4).column == 2);
  CHECK(finder.at(1).line == 1);
  CHECK(finder.at(5).column == 3);  // the end of the text
}

TEST_CASE("text of a file is shown short, without control characters") {
  CHECK(xml::in_quotes("a\nb\x7F\xC2\x9B[") == R"("a\x0ab\x7f\x9b[")");
  CHECK(xml::in_quotes(std::string(61, 'a')) == '"' + std::string(60, 'a') + "…\"");
  CHECK(xml::in_quotes(std::string(60, 'a')) == '"' + std::string(60, 'a') + '"');
  CHECK(xml::one_of({"a"}) == "a");
  CHECK(xml::one_of({"a", "b", "c"}) == "a, b or c");
}

}  // namespace
}  // namespace pathvet
