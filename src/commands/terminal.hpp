#pragma once

#include "pathvet/reporting/text.hpp"

namespace pathvet::commands {

/// How text on standard output may look: the terminal's width (80 where there is none, COLUMNS before both),
/// colours on a terminal without NO_COLOR, more than ASCII where the locale says so.
[[nodiscard]] TextStyle style_of_standard_output();

/// Descriptors 0 to 2 are open after this, so that no output file is mistaken for one of them.
void keep_standard_streams();

}  // namespace pathvet::commands
