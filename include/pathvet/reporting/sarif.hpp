#pragma once

#include <iosfwd>

#include "pathvet/reporting/report.hpp"

namespace pathvet {

/// The report in the Static Analysis Results Interchange Format (SARIF 2.1.0, OASIS), for systems that show
/// findings beside the path file: a rule for every code, a result for every finding at the place of the
/// waypoint that its segment ends at. Fingerprints depend on code, waypoints, joint and on which of several
/// such findings it is, not on lines or values. The caller looks at the stream's state.
void write_sarif(const Report& report, std::ostream& out);

}  // namespace pathvet
