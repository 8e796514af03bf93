#include "pathvet/checks/rank_starts.hpp"

#include <algorithm>
#include <atomic>
#include <cmath>
#include <mutex>
#include <thread>
#include <tuple>

#include "path_checker.hpp"

namespace pathvet {
namespace {

StartTrial summary(const PathResult& result) {
  StartTrial out;
  out.joints = result.start;
  out.branch = result.start_branch;
  out.errors = result.count(Level::error);
  out.warnings = result.count(Level::warning);
  for (const SegmentResult& segment : result.segments) {
    if (segment.peak_axis < 0 || segment.peak_ratio <= out.peak_ratio) continue;
    out.peak_ratio = segment.peak_ratio;
    out.peak_joint = result.axes[static_cast<std::size_t>(segment.peak_axis)].name;
  }
  out.limit_margin_share = std::numeric_limits<double>::infinity();
  for (const AxisResult& axis : result.axes) {
    if (!axis.lower) continue;
    const double share =
        std::min(axis.min - *axis.lower, *axis.upper - axis.max) / (*axis.upper - *axis.lower);
    if (share >= out.limit_margin_share) continue;
    out.limit_margin_share = share;
    out.limit_margin_joint = axis.name;
  }
  if (out.limit_margin_joint.empty()) out.limit_margin_share = 1;
  for (const Finding& finding : result.findings) {
    if (level(finding.code) != Level::error) continue;
    out.first_error = finding.code;
    out.first_error_segment = finding.segment;
    break;
  }
  return out;
}

bool better(const StartTrial& a, const StartTrial& b) {
  // Branches that move the limiting joint alike differ in the last bits only: those are a tie.
  const auto coarse = [](double share) { return std::round(share * 1e9); };
  const auto key = [&](const StartTrial& t) {
    return std::tuple(t.errors, t.warnings, coarse(t.peak_ratio), coarse(-t.limit_margin_share));
  };
  if (key(a) != key(b)) return key(a) < key(b);
  return std::lexicographical_compare(a.joints.begin(), a.joints.end(), b.joints.begin(), b.joints.end());
}

}  // namespace

Reading<StartRanking> rank_starts(const Path& path, const Cell& cell, const CheckOptions& options,
                                  const std::function<bool(double)>& proceed) {
  Reading<StartRanking> out;
  PathChecker checker(path, cell, options, nullptr);
  out.faults = checker.faults();
  if (!out.faults.empty()) return out;
  StartRanking ranking;
  ranking.path_file = path.file;
  ranking.path_name = path.name;
  ranking.cell_file = path.cell_file;
  ranking.cell = cell.name;
  ranking.arm = cell.arm.name;
  for (const Joint& joint : cell.arm.joints) {
    ranking.joint_names.push_back(joint.name);
    ranking.joint_types.push_back(joint.type);
  }
  ranking.complete = checker.starts_complete();
  const std::vector<JointVector> starts = checker.starts();
  ranking.trials.resize(starts.size());

  std::atomic<std::size_t> next = 0;
  std::atomic<bool> stopped = false;
  std::mutex asking;
  std::size_t done = 0;
  const auto work = [&] {
    for (;;) {
      const std::size_t i = next++;
      if (i >= starts.size() || stopped) return;
      ranking.trials[i] = summary(PathChecker(path, cell, options, nullptr).run(starts[i], true, false));
      const std::lock_guard lock(asking);
      ++done;
      if (proceed && !proceed(static_cast<double>(done) / static_cast<double>(starts.size()))) stopped = true;
    }
  };
  {
    std::vector<std::jthread> helpers;
    for (int k = 1; k < options.threads; ++k) helpers.emplace_back(work);
    work();
  }
  ranking.stopped = stopped;
  if (!stopped) std::sort(ranking.trials.begin(), ranking.trials.end(), better);
  out.value = std::move(ranking);
  return out;
}

}  // namespace pathvet
