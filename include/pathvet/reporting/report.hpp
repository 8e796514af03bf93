#pragma once

#include <string>
#include <vector>

#include "pathvet/checks/result.hpp"

namespace pathvet {

/// Everything that a report on checked paths says; every medium is written from this alone.
struct Report {
  std::string tool_version;
  CheckOptions options;
  bool strict = false;  ///< warnings count towards the verdict
  std::vector<PathResult> paths;

  [[nodiscard]] int count(Level wanted) const {
    int sum = 0;
    for (const PathResult& path : paths) sum += path.count(wanted);
    return sum;
  }
  [[nodiscard]] int errors() const { return count(Level::error); }
  [[nodiscard]] int warnings() const { return count(Level::warning); }

  /// A path is flagged by an error; with `strict` by a warning too.
  [[nodiscard]] bool is_flagged(const PathResult& path) const {
    return path.count(Level::error) > 0 || (strict && path.count(Level::warning) > 0);
  }
  [[nodiscard]] bool is_flagged() const {
    for (const PathResult& path : paths) {
      if (is_flagged(path)) return true;
    }
    return false;
  }
  /// "clear" or "flagged".
  [[nodiscard]] const char* verdict(const PathResult& path) const { return word(is_flagged(path)); }
  [[nodiscard]] const char* verdict() const { return word(is_flagged()); }
  /// 0 clear, 1 flagged.
  [[nodiscard]] int exit_status() const { return is_flagged() ? 1 : 0; }

 private:
  static const char* word(bool flagged) { return flagged ? "flagged" : "clear"; }
};

}  // namespace pathvet
