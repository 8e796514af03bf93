#pragma once

#include <iosfwd>

#include "pathvet/reporting/report.hpp"

namespace pathvet {

/// The report as JSON (docs/report.schema.json): members in a fixed order, mm, deg and s, numbers that read
/// back to the same double, `null` for what has no value. The caller looks at the stream's state.
void write_json(const Report& report, std::ostream& out);

}  // namespace pathvet
