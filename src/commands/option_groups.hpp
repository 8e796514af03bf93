#pragma once

#include <spdlog/common.h>

#include <optional>
#include <string>

#include "commands/options.hpp"
#include "pathvet/checks/result.hpp"

/// Options that several commands share, each group with the function that turns its values into typed fields.
namespace pathvet::commands {

[[nodiscard]] boost::program_options::options_description common_options();
[[nodiscard]] spdlog::level::level_enum read_log_level(OptionValues& values);

[[nodiscard]] boost::program_options::options_description tolerance_options();
/// The check's options with what the call changes; whatever is wrong with them becomes a problem of `values`.
[[nodiscard]] CheckOptions read_check_options(OptionValues& values);

/// A file that the call asks for: the option and where it goes.
struct OutputRequest {
  std::string option;  ///< "--json"
  std::string target;  ///< a file, or "-" for standard output
};

/// The target of an option, if it was given; an empty one is a problem.
[[nodiscard]] std::optional<OutputRequest> read_output(OptionValues& values, const std::string& name);

/// A problem if more than one goes to standard output.
void check_standard_output(OptionValues& values, const std::vector<OutputRequest>& outputs);

}  // namespace pathvet::commands
