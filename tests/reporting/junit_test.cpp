#include "pathvet/reporting/junit.hpp"

#include <doctest/doctest.h>

#include <pugixml.hpp>
#include <sstream>

#include "pathvet/reporting/caution.hpp"
#include "reporting/sample_result.hpp"

using namespace pathvet;

namespace {

/// As another parser reads it.
pugi::xml_document junit(const Report& report) {
  std::ostringstream out;
  write_junit(report, out);
  pugi::xml_document document;
  const pugi::xml_parse_result result = document.load_string(out.str().c_str());
  INFO(out.str());
  REQUIRE(result.status == pugi::status_ok);
  return document;
}

std::string attribute(const pugi::xml_node& node, const char* name) {
  return node.attribute(name).value();
}

}  // namespace

TEST_CASE("JUnit: a suite for a path, a case for a segment") {
  const auto document = junit(sample::report(sample::full_path()));
  const pugi::xml_node suites = document.child("testsuites");
  CHECK(attribute(suites, "tests") == "3");
  CHECK(attribute(suites, "failures") == "1");
  const pugi::xml_node suite = suites.child("testsuite");
  CHECK(attribute(suite, "name") == "flange trim");
  CHECK(attribute(suite, "failures") == "1");
  const pugi::xml_node first = suite.child("testcase");
  CHECK(attribute(first, "name") == "A to B");
  CHECK(attribute(first, "classname") == "flange trim");
  CHECK(!first.first_child());
  const pugi::xml_node second = first.next_sibling("testcase");
  const std::string failure = second.child("failure").text().get();
  CHECK(failure.find("flange-trim.xml:5:5: error: joint-speed: ") != std::string::npos);
  CHECK(failure.find("warning") == std::string::npos);
  CHECK(attribute(second.child("failure"), "type") == "branch-flip");
  const std::string output = second.child("system-out").text().get();
  CHECK(output.find("flange-trim.xml:5:5: warning: speed-margin: ") != std::string::npos);
  CHECK(output.find("error") == std::string::npos);
  const pugi::xml_node property = suite.child("properties").child("property");
  CHECK(attribute(property, "name") == "caution");
  CHECK(attribute(property, "value") == caution());
}

TEST_CASE("JUnit: warnings fail where they count") {
  PathResult path = sample::empty_path();
  path.findings = {sample::singular_finding()};
  path.segments[1].findings = {0};
  Report report = sample::report(path);
  CHECK(attribute(junit(report).child("testsuites"), "failures") == "0");
  report.strict = true;
  CHECK(attribute(junit(report).child("testsuites"), "failures") == "1");
}

TEST_CASE("JUnit: any name comes through") {
  PathResult path = sample::empty_path();
  path.name = "a<b & \"c\">\n\t]]>";
  path.file = "bad\xFF\x01\xEF\xBF\xBF.xml";
  // The parser of these tests lets a bare '<' in an attribute pass; others don't.
  std::ostringstream out;
  write_junit(sample::report(path), out);
  CHECK(out.str().find("name=\"a&lt;b &amp; &quot;c&quot;&gt;&#10;&#9;]]&gt;\"") != std::string::npos);
  const auto document = junit(sample::report(path));
  const pugi::xml_node suite = document.child("testsuites").child("testsuite");
  CHECK(attribute(suite, "name") == path.name);
  CHECK(attribute(suite.child("properties").find_child_by_attribute("name", "file"), "value") ==
        "bad\xEF\xBF\xBD\xEF\xBF\xBD\xEF\xBF\xBD.xml");
}
