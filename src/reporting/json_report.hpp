#pragma once

#include "pathvet/reporting/report.hpp"
#include "reporting/json_values.hpp"

namespace pathvet::reporting {

/// The whole report as it stands in the JSON file; other media that carry it start from this.
[[nodiscard]] Json report_json(const Report& report);

}  // namespace pathvet::reporting
