#include "pathvet/reporting/csv.hpp"

#include <array>
#include <ostream>

#include "pathvet/reporting/caution.hpp"
#include "pathvet/reporting/messages.hpp"
#include "reporting/escapes.hpp"
#include "reporting/json_values.hpp"
#include "reporting/phrases.hpp"
#include "reporting/units.hpp"

namespace pathvet {
namespace {

using namespace reporting;

constexpr std::array columns = {"row",   "file",   "path",     "segment", "from",    "to",
                                "line",  "column", "code",     "level",   "joint",   "value",
                                "limit", "unit",   "begin_mm", "end_mm",  "peak_mm", "begin_s",
                                "end_s", "peak_s", "message",  "remedy"};
constexpr std::size_t message_column = 20;
static_assert(columns[message_column][0] == 'm' && columns.size() == message_column + 2);

using Row = std::array<std::string, columns.size()>;

/// Lines end as RFC 4180 has it.
void write_row(const Row& row, std::ostream& out) {
  for (std::size_t i = 0; i < row.size(); ++i) out << (i > 0 ? "," : "") << row[i];
  out << "\r\n";
}

/// As in the JSON report; empty where there is no number.
std::string field(const Json& value) {
  return value.is_null() ? "" : value.dump();
}

Row finding_row(const PathResult& path, const Finding& f) {
  const SegmentResult& segment = segment_of(path, f);
  return {"finding",
          csv_text(path.file),
          csv_text(path.name),
          std::to_string(f.segment),
          csv_text(segment.from),
          csv_text(segment.to),
          std::to_string(segment.place.line),
          std::to_string(segment.place.column),
          name(f.code),
          level(f.code) == Level::error ? "error" : "warning",
          csv_text(axis_name(path, f.axis)),
          f.unbounded ? "" : field(in_unit(f.value, f.quantity)),
          field(in_unit(f.limit, f.quantity)),
          csv_text(unit(f.quantity)),
          field(number(f.begin_length)),
          field(number(f.end_length)),
          field(number(f.peak_length)),
          field(number(f.begin_time)),
          field(number(f.end_time)),
          field(number(f.peak_time)),
          csv_text(message(path, f)),
          csv_text(remedy(path, f))};
}

}  // namespace

void write_csv(const Report& report, std::ostream& out) {
  Row header;
  for (std::size_t i = 0; i < columns.size(); ++i) header[i] = columns[i];
  write_row(header, out);
  for (const PathResult& path : report.paths) {
    for (const Finding& finding : path.findings) write_row(finding_row(path, finding), out);
  }
  Row last;
  last[0] = "caution";
  last[message_column] = csv_text(caution());
  write_row(last, out);
}

}  // namespace pathvet
