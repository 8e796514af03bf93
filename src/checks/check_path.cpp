#include "pathvet/checks/check_path.hpp"

#include <algorithm>

#include "path_checker.hpp"
#include "pathvet/tracking/nearest.hpp"

namespace pathvet {
namespace {

/// Smallest over the axes of the distance to a limit as a share of the range; the larger the better.
double limit_margin_share(const PathResult& result) {
  double least = 1;
  for (const AxisResult& axis : result.axes) {
    if (!axis.lower) continue;
    least = std::min(least,
                     std::min(axis.min - *axis.lower, *axis.upper - axis.max) / (*axis.upper - *axis.lower));
  }
  return least;
}

bool better(const PathResult& a, const PathResult& b) {
  const auto key = [](const PathResult& r) {
    return std::tuple(r.count(Level::error), r.count(Level::warning), -limit_margin_share(r));
  };
  return key(a) < key(b);
}

/// The configuration that stands in where no start can be had: home, or the middle of the limits.
JointVector resting(const Cell& cell) {
  if (cell.home) return *cell.home;
  JointVector out = JointVector::Zero(cell.arm.joint_count());
  for (int i = 0; i < cell.arm.joint_count(); ++i) {
    const Joint& joint = cell.arm.joints[static_cast<std::size_t>(i)];
    if (!joint.continuous) out[i] = 0.5 * (joint.lower + joint.upper);
  }
  return out;
}

}  // namespace

Reading<PathResult> check_path(const Path& path, const Cell& cell, const CheckOptions& options,
                               CheckObserver* observer) {
  Reading<PathResult> out;
  PathChecker checker(path, cell, options, observer);
  out.faults = checker.faults();
  if (!out.faults.empty()) return out;
  if (const auto taught = checker.taught_start()) {
    out.value = checker.run(*taught, true, true);
    return out;
  }
  const std::vector<JointVector> starts = checker.starts();
  if (starts.empty()) {
    out.value = checker.run(resting(cell), false, false);
    return out;
  }
  JointVector chosen = starts.front();
  if (cell.home) {
    chosen = starts[*nearest(cell.arm, *cell.home, starts)];
  } else if (starts.size() > 1) {
    std::optional<PathResult> best;
    for (const JointVector& start : starts) {
      PathResult result = PathChecker(path, cell, options, nullptr).run(start, true, false);
      if (best && !better(result, *best)) continue;
      best = std::move(result);
      chosen = start;
    }
  }
  out.value = checker.run(chosen, true, false);
  return out;
}

}  // namespace pathvet
