#pragma once

#include <optional>
#include <string>
#include <vector>

#include "commands/option_groups.hpp"
#include "pathvet/retiming/retime.hpp"

namespace pathvet::commands {

struct RetimeSettings {
  std::string path;
  std::optional<std::string> cell;  ///< instead of the one that the path names
  std::string by = "stretch";       ///< "segment", "stretch", "profile"
  RetimeOptions options;
  bool quiet = false;
  std::optional<OutputRequest> output, profile, json;
  spdlog::level::level_enum log_level = spdlog::level::warn;

  [[nodiscard]] std::vector<OutputRequest> outputs() const;
  [[nodiscard]] bool wants_text() const;
};

[[nodiscard]] std::string retime_help();

/// From the words of the call to settings; touches no file.
[[nodiscard]] Setup<RetimeSettings> setup_retime(const Arguments& arguments);

/// What is wrong with the files that the settings name, before any of them is read.
[[nodiscard]] std::vector<std::string> file_problems(const RetimeSettings& settings);

/// Reads, re-times, checks what it wrote. Returns the exit status 0 or 1; throws what is in errors.hpp.
[[nodiscard]] int run_retime(const RetimeSettings& settings);

}  // namespace pathvet::commands
