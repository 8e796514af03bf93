#include "pathvet/reporting/junit.hpp"

#include <fmt/format.h>

#include <ostream>
#include <vector>

#include "pathvet/reporting/caution.hpp"
#include "pathvet/reporting/messages.hpp"
#include "reporting/escapes.hpp"
#include "reporting/phrases.hpp"

namespace pathvet {
namespace {

using namespace reporting;

using Findings = std::vector<const Finding*>;

/// The findings of a segment, apart by whether they fail its test case.
struct Sorted {
  Findings failing, other;
};

Sorted sorted(const Report& report, const PathResult& path, const SegmentResult& segment) {
  Sorted out;
  for (int index : segment.findings) {
    const Finding& finding = path.findings.at(static_cast<std::size_t>(index));
    const bool fails = report.strict || level(finding.code) == Level::error;
    (fails ? out.failing : out.other).push_back(&finding);
  }
  return out;
}

/// One line a finding: where it is in the file, then what it is and what helps.
std::string lines(const PathResult& path, const Findings& findings) {
  std::string out;
  for (const Finding* finding : findings) {
    const SourcePlace place = segment_of(path, *finding).place;
    out += fmt::format("{}:{}:{}: {}: {}: {} {}\n", path.file, place.line, place.column,
                       level(finding->code) == Level::error ? "error" : "warning", name(finding->code),
                       message(path, *finding), remedy(path, *finding));
  }
  return out;
}

std::string codes(const Findings& findings) {
  std::vector<std::string> names;
  for (const Finding* finding : findings) {
    if (names.empty() || names.back() != name(finding->code)) names.emplace_back(name(finding->code));
  }
  return listed(names);
}

/// The name of the path, or its file where it has none.
const std::string& title(const PathResult& path) {
  return path.name.empty() ? path.file : path.name;
}

void write_case(const Report& report, const PathResult& path, const SegmentResult& segment,
                std::ostream& out) {
  const Sorted found = sorted(report, path, segment);
  out << fmt::format(R"(    <testcase name="{} to {}" classname="{}")", xml_escaped(segment.from),
                     xml_escaped(segment.to), xml_escaped(title(path)));
  if (found.failing.empty() && found.other.empty()) {
    out << "/>\n";
    return;
  }
  out << ">\n";
  if (!found.failing.empty()) {
    out << fmt::format("      <failure message=\"{}\" type=\"{}\">{}</failure>\n",
                       xml_escaped(codes(found.failing)), name(found.failing.front()->code),
                       xml_escaped(lines(path, found.failing)));
  }
  if (!found.other.empty()) {
    out << fmt::format("      <system-out>{}</system-out>\n", xml_escaped(lines(path, found.other)));
  }
  out << "    </testcase>\n";
}

int failures(const Report& report, const PathResult& path) {
  int sum = 0;
  for (const SegmentResult& segment : path.segments) {
    if (!sorted(report, path, segment).failing.empty()) ++sum;
  }
  return sum;
}

void write_property(const char* key, const std::string& value, std::ostream& out) {
  out << fmt::format("      <property name=\"{}\" value=\"{}\"/>\n", key, xml_escaped(value));
}

void write_suite(const Report& report, const PathResult& path, std::ostream& out) {
  out << fmt::format("  <testsuite name=\"{}\" tests=\"{}\" failures=\"{}\" errors=\"0\" skipped=\"0\">\n",
                     xml_escaped(title(path)), path.segments.size(), failures(report, path));
  out << "    <properties>\n";
  write_property("caution", caution(), out);
  write_property("file", path.file, out);
  write_property("cell", path.cell_file, out);
  write_property("verdict", report.verdict(path), out);
  out << "    </properties>\n";
  for (const SegmentResult& segment : path.segments) write_case(report, path, segment, out);
  out << "  </testsuite>\n";
}

}  // namespace

void write_junit(const Report& report, std::ostream& out) {
  std::size_t tests = 0;
  int failed = 0;
  for (const PathResult& path : report.paths) {
    tests += path.segments.size();
    failed += failures(report, path);
  }
  out << "<?xml version=\"1.0\" encoding=\"UTF-8\"?>\n"
      << fmt::format("<testsuites name=\"pathvet\" tests=\"{}\" failures=\"{}\" errors=\"0\">\n", tests,
                     failed);
  for (const PathResult& path : report.paths) write_suite(report, path, out);
  out << "</testsuites>\n";
}

}  // namespace pathvet
