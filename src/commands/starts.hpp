#pragma once

#include <optional>
#include <string>
#include <vector>

#include "commands/option_groups.hpp"

namespace pathvet::commands {

struct StartsSettings {
  std::string path;
  std::optional<std::string> cell;
  CheckOptions options;
  bool quiet = false;
  std::optional<OutputRequest> json;
  std::optional<int> take;              ///< rank, from 1
  std::optional<OutputRequest> output;  ///< the path with that start
  spdlog::level::level_enum log_level = spdlog::level::warn;

  [[nodiscard]] std::vector<OutputRequest> outputs() const;
  [[nodiscard]] bool wants_text() const;
};

[[nodiscard]] std::string starts_help();

/// From the words of the call to settings; touches no file.
[[nodiscard]] Setup<StartsSettings> setup_starts(const Arguments& arguments);

[[nodiscard]] std::vector<std::string> file_problems(const StartsSettings& settings);

/// Returns 0 if the best start (or the one taken) has no error, 1 if it has or there is none.
[[nodiscard]] int run_starts(const StartsSettings& settings);

}  // namespace pathvet::commands
