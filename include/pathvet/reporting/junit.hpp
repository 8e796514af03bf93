#pragma once

#include <iosfwd>

#include "pathvet/reporting/report.hpp"

namespace pathvet {

/// The report as JUnit's XML, for build servers: a test suite for every path, a test case for every segment,
/// failed by errors (with `strict` by warnings too); other warnings are its output. The caller looks at the
/// stream's state.
void write_junit(const Report& report, std::ostream& out);

}  // namespace pathvet
