#pragma once

#include <functional>
#include <string>
#include <vector>

#include "pathvet/checks/check_path.hpp"
#include "random_case.hpp"

namespace pathvet::test {

/// A result boiled down to what a law may speak of: where, what, how much.
struct Mark {
  int segment = 0;
  Code code = Code::unproven;
  int axis = -1;
  double begin = 0, end = 0;
  double value = 0;      ///< 0 where there is none
  bool sizeable = true;  ///< value counts
};

[[nodiscard]] std::vector<Mark> marks_of(const PathResult& result);

/// In words, what differs between two lists of marks beyond the contract's 0.01 mm or degrees and 0.01 %.
[[nodiscard]] std::vector<std::string> differences(std::vector<Mark> expected, std::vector<Mark> found,
                                                   const PathResult& result);

/// Joints at the path's end.
[[nodiscard]] JointVector arrival(const Path& path, const Cell& cell, const CheckOptions& options);

/// A path made ready for a law: a random one, every other one near a singularity.
[[nodiscard]] RandomCase law_case(Random& random, int number);

}  // namespace pathvet::test
