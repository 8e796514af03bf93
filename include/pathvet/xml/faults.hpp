#pragma once

#include <optional>
#include <string>
#include <vector>

#include "pathvet/model/path.hpp"

namespace pathvet {

/// One thing that is wrong with an input file. `what` says what is wrong and what was expected.
struct Fault {
  std::string file;
  SourcePlace place;
  std::string what;
};

/// `FILE:LINE:COLUMN: error: WHAT`
[[nodiscard]] std::string to_string(const Fault& fault);

/// What a reader returns: a value, or every fault that the file has, in the order of their places: the first
/// hundred, and then one that says how many there are. Broken XML gives one fault alone.
template <typename T>
struct Reading {
  std::optional<T> value;  ///< set exactly when `faults` is empty
  std::vector<Fault> faults;
};

}  // namespace pathvet
