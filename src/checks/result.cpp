#include "pathvet/checks/result.hpp"

#include <algorithm>
#include <cmath>

namespace pathvet {
namespace {

// Finer steps than these are below what a double can tell apart on an arm of ordinary size.
constexpr double finest_step_length = 1e-6;                      // mm
constexpr double finest_step_angle = 1e-6 * radians_per_degree;  // rad
constexpr int most_threads = 1024;

// Written so that NaN fails.
bool at_least(double value, double least) {
  return std::isfinite(value) && value >= least;
}

}  // namespace

std::vector<std::string> CheckOptions::problems() const {
  std::vector<std::string> found;
  const auto ask = [&found](bool good, const char* what) {
    if (!good) found.emplace_back(what);
  };
  ask(at_least(step_length, finest_step_length), "--step-mm must be at least 0.000001 (mm)");
  ask(at_least(step_angle, finest_step_angle), "--step-deg must be at least 0.000001 (degrees)");
  ask(at_least(limit_margin_angle, 0), "--limit-margin must not be negative (degrees)");
  ask(at_least(limit_margin_length, 0), "--limit-margin-mm must not be negative (mm)");
  ask(speed_margin > 0 && speed_margin <= 1, "--speed-margin must be above 0 and at most 100 (percent)");
  ask(at_least(singular_below, 0), "--singular-below must not be negative (a singular value)");
  ask(!reduced_speed || (at_least(*reduced_speed, 0) && *reduced_speed > 0),
      "--reduced-speed must be above 0 (mm/s)");
  ask(threads >= 1 && threads <= most_threads, "--threads must be a whole number from 1 to 1024");
  return found;
}

int PathResult::count(Level wanted) const {
  return static_cast<int>(
      std::ranges::count_if(findings, [wanted](const Finding& f) { return level(f.code) == wanted; }));
}

}  // namespace pathvet
