#pragma once

#include <iosfwd>

#include "pathvet/reporting/report.hpp"

namespace pathvet {

/// How a text may look where it goes to.
struct TextStyle {
  int width = 80;        ///< columns; cells of tables wrap to fit (at least 40 are used)
  bool colour = false;   ///< ANSI colours; nothing is said by colour alone
  bool unicode = false;  ///< arrows and bars beyond ASCII
};

/// The report for a person: verdict first, then what is flagged, where, how bad, and what helps; the caution
/// last.
void write_text(const Report& report, std::ostream& out, const TextStyle& style);

}  // namespace pathvet
