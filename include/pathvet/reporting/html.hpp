#pragma once

#include <iosfwd>
#include <vector>

#include "pathvet/reporting/curves.hpp"
#include "pathvet/reporting/report.hpp"

namespace pathvet {

/// The report as one page that needs nothing but itself: verdict and caution, the findings as a table, charts
/// and a view of the arm on its way. `curves`: one for each of the report's paths. The caller looks at the
/// stream's state.
void write_html(const Report& report, const std::vector<PathCurves>& curves, std::ostream& out);

}  // namespace pathvet
