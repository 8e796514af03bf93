#pragma once

#include <string>
#include <vector>

#include "pathvet/checks/check_path.hpp"
#include "random_case.hpp"

namespace pathvet::test {

/// What check_path reports against what the reference finds, in words; empty where they agree.
struct Verdict {
  std::vector<std::string> differences;
  int segments = 0;      ///< compared to their end
  int horizons = 0;      ///< compared up to where the pose can't be followed
  int jumps = 0;         ///< compared past a jump
  int exact = 0;         ///< exact passes on smooth curves
  int findings = 0;      ///< matched
  bool unclear = false;  ///< passes a singularity too near to the tolerance of exact passes
};

[[nodiscard]] Verdict compare(const Cell& cell, const Path& path, const CheckOptions& options,
                              const PathResult& result);

}  // namespace pathvet::test
