#pragma once

namespace pathvet {

/// What every report carries, on every medium: one paragraph, no line breaks.
[[nodiscard]] const char* caution();

}  // namespace pathvet
