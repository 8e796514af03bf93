#pragma once

#include <optional>
#include <string>
#include <vector>

#include "commands/option_groups.hpp"

namespace pathvet::commands {

struct CheckSettings {
  std::vector<std::string> paths;
  std::optional<std::string> cell;  ///< instead of the one that a path names
  CheckOptions options;
  bool strict = false;
  bool quiet = false;
  std::optional<OutputRequest> json, html, sarif, junit, csv, trace;
  spdlog::level::level_enum log_level = spdlog::level::warn;

  [[nodiscard]] std::vector<OutputRequest> outputs() const;
  [[nodiscard]] bool wants_text() const;
};

[[nodiscard]] std::string check_help();

/// From the words of the call to settings; touches no file.
[[nodiscard]] Setup<CheckSettings> setup_check(const Arguments& arguments);

/// What is wrong with the files that the settings name, before any of them is read.
[[nodiscard]] std::vector<std::string> file_problems(const CheckSettings& settings);

/// Reads, checks and writes. Returns the exit status 0 or 1; throws what is in errors.hpp.
[[nodiscard]] int run_check(const CheckSettings& settings);

}  // namespace pathvet::commands
