#pragma once

#include <doctest/doctest.h>

#include <string>
#include <vector>

#include "pathvet/xml/faults.hpp"

namespace pathvet::test {

/// A sound text with one piece of it replaced, and the faults that this brings: `LINE:COLUMN: WHAT`, one a
/// line.
struct Change {
  std::string from;
  std::string to;
  std::string faults;
};

inline std::string changed(std::string text, const std::string& from, const std::string& to) {
  const std::size_t at = text.find(from);
  REQUIRE_MESSAGE(at != std::string::npos, from);
  return text.replace(at, from.size(), to);
}

/// The faults as `LINE:COLUMN: WHAT`, one a line.
inline std::string listed(const std::vector<Fault>& faults) {
  std::string list;
  for (const Fault& fault : faults) {
    if (!list.empty()) list += '\n';
    list += std::to_string(fault.place.line) + ':' + std::to_string(fault.place.column) + ": " + fault.what;
  }
  return list;
}

}  // namespace pathvet::test
