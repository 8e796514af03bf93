#pragma once

#include <functional>

#include "pathvet/checks/result.hpp"
#include "pathvet/xml/faults.hpp"

namespace pathvet {

/// One start configuration and how the whole path runs from it.
struct StartTrial {
  JointVector joints;  ///< rad or mm
  std::string branch;
  int errors = 0, warnings = 0;
  double peak_ratio = 0;  ///< greatest |joint speed| / limit; infinite where unbounded
  std::string peak_joint;
  double limit_margin_share = 0;   ///< smallest distance to a limit, as a share of the joint's range
  std::string limit_margin_joint;  ///< empty where no joint has limits
  std::optional<Code> first_error;
  int first_error_segment = 0;
};

struct StartRanking {
  std::string path_file, path_name, cell_file, cell, arm;
  std::vector<std::string> joint_names;
  std::vector<JointType> joint_types;
  std::vector<StartTrial> trials;  ///< best first
  bool complete = false;           ///< every configuration of the start pose is among them
  bool stopped = false;
};

/// Runs the whole path from every configuration of its start pose that lies inside the limits, whole turns
/// included (all, if none does), on `options.threads` threads. Ranked by errors, then warnings, then smallest
/// speed ratio, then largest limit margin, then joint values. `proceed` is asked between runs with the share
/// done; false stops.
[[nodiscard]] Reading<StartRanking> rank_starts(const Path& path, const Cell& cell,
                                                const CheckOptions& options,
                                                const std::function<bool(double)>& proceed = {});

}  // namespace pathvet
