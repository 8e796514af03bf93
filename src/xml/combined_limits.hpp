#pragma once

#include <vector>

#include "pathvet/model/arm.hpp"
#include "xml/document.hpp"

namespace pathvet::xml {

/// The `combined-limit` children of an arm with these joints.
[[nodiscard]] std::vector<CombinedLimit> read_combined_limits(const Element& arm,
                                                              const std::vector<Joint>& joints);

}  // namespace pathvet::xml
