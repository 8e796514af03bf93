#pragma once

#include <iosfwd>

#include "pathvet/reporting/report.hpp"

namespace pathvet {

/// The findings as a table for a spreadsheet: CSV as in RFC 4180 with a header, one row for every finding and
/// a last one with the caution; mm, deg and s. The first column says which kind of row it is. Text that a
/// spreadsheet would take for a formula has an apostrophe before it. The caller looks at the stream's state.
void write_csv(const Report& report, std::ostream& out);

}  // namespace pathvet
