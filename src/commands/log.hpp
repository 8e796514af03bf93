#pragma once

#include <spdlog/common.h>

namespace pathvet::commands {

/// Logs go to standard error from `level` on.
void start_log(spdlog::level::level_enum level);

}  // namespace pathvet::commands
