#pragma once

#include <string>

#include "pathvet/checks/result.hpp"

namespace pathvet {

/// What was found and how bad it is, as one or two sentences in user units (mm, deg, s). The place on the
/// segment is not repeated. `finding` belongs to `path`.
[[nodiscard]] std::string message(const PathResult& path, const Finding& finding);

/// What whoever programs the path can do about it.
[[nodiscard]] std::string remedy(const PathResult& path, const Finding& finding);

}  // namespace pathvet
