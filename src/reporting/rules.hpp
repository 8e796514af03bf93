#pragma once

#include "pathvet/checks/finding.hpp"

namespace pathvet::reporting {

/// What findings of a code mean, whatever their values: for media that explain codes once.
struct Rule {
  const char* summary;  ///< one sentence
  const char* help;     ///< what it means for the arm, and what can be done
};
[[nodiscard]] const Rule& rule(Code code);

inline constexpr int code_count = static_cast<int>(Code::unproven) + 1;

}  // namespace pathvet::reporting
