#include "commands/log.hpp"

#include <spdlog/sinks/stdout_color_sinks.h>
#include <spdlog/spdlog.h>

namespace pathvet::commands {

void start_log(spdlog::level::level_enum level) {
  spdlog::set_default_logger(
      std::make_shared<spdlog::logger>("pathvet", std::make_shared<spdlog::sinks::stderr_color_sink_st>()));
  spdlog::set_pattern("pathvet: %l: %v");
  spdlog::set_level(level);
}

}  // namespace pathvet::commands
