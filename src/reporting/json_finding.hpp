#pragma once

#include "reporting/json_values.hpp"

namespace pathvet::reporting {

/// The finding with this index as it stands in the report.
[[nodiscard]] Json finding_json(const PathResult& path, std::size_t index);

}  // namespace pathvet::reporting
