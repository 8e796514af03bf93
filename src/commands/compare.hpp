#pragma once

#include <optional>
#include <string>
#include <vector>

#include "commands/option_groups.hpp"

namespace pathvet::commands {

struct CompareSettings {
  std::string before, after;
  bool quiet = false;
  std::optional<OutputRequest> json;

  [[nodiscard]] std::vector<OutputRequest> outputs() const;
  [[nodiscard]] bool wants_text() const;
};

[[nodiscard]] std::string compare_help();

/// From the words of the call to settings; touches no file.
[[nodiscard]] Setup<CompareSettings> setup_compare(const Arguments& arguments);

[[nodiscard]] std::vector<std::string> file_problems(const CompareSettings& settings);

/// Returns 1 if anything is new or worse, otherwise 0.
[[nodiscard]] int run_compare(const CompareSettings& settings);

}  // namespace pathvet::commands
