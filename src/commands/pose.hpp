#pragma once

#include <optional>
#include <string>
#include <vector>

#include "commands/option_groups.hpp"
#include "pathvet/model/path.hpp"

namespace pathvet::commands {

struct PoseSettings {
  std::string cell;
  std::optional<std::string> tool, frame;
  std::optional<std::vector<double>> joints;  ///< deg or mm: which, only the cell knows
  std::optional<Pose> asked;                  ///< in the frame
  Orientation orientation = Orientation::full;
  bool beyond_limits = false;
  bool turns = false;
  std::optional<OutputRequest> json;
  spdlog::level::level_enum log_level = spdlog::level::warn;

  [[nodiscard]] std::vector<OutputRequest> outputs() const;
};

[[nodiscard]] std::string pose_help();

/// From the words of the call to settings; touches no file.
[[nodiscard]] Setup<PoseSettings> setup_pose(const Arguments& arguments);

[[nodiscard]] std::vector<std::string> file_problems(const PoseSettings& settings);

/// Returns 0: a question was answered, even if the answer is that there is no configuration.
[[nodiscard]] int run_pose(const PoseSettings& settings);

}  // namespace pathvet::commands
