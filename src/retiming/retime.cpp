#include "pathvet/retiming/retime.hpp"

#include <algorithm>
#include <charconv>
#include <cmath>

#include "pathvet/xml/read.hpp"
#include "pathvet/xml/rewrite.hpp"
#include "plan.hpp"

namespace pathvet {
namespace {

constexpr int most_rounds = 8;  // of writing, checking and lowering
constexpr double extra = 1e-9;  // by which a speed is lowered below what a check found to hold
constexpr int most_most_cuts = 100;

/// The cell with the reserve taken off its speeds and accelerations.
Cell with_reserve(Cell cell, double reserve) {
  const double kept = 1 - reserve;
  const auto lower = [kept](std::vector<Joint>& joints) {
    for (Joint& joint : joints) {
      joint.speed *= kept;
      if (joint.acceleration) *joint.acceleration *= kept;
    }
  };
  lower(cell.arm.joints);
  for (CombinedLimit& limit : cell.arm.combined_limits) {
    if (limit.speed) *limit.speed *= kept;
  }
  for (Positioner& positioner : cell.positioners) lower(positioner.joints);
  return cell;
}

/// By how much a segment has to be slower for its rate limits to hold; 1 where they do.
std::vector<double> slowdowns(const PathResult& result) {
  std::vector<double> out(result.segments.size(), 1.0);
  for (const Finding& finding : result.findings) {
    double& factor = out[static_cast<std::size_t>(finding.segment - 1)];
    if (finding.unbounded) continue;
    if (finding.code == Code::joint_speed) factor = std::max(factor, finding.ratio);
    if (finding.code == Code::joint_acceleration) factor = std::max(factor, std::sqrt(finding.ratio));
  }
  return out;
}

/// The density at which a stretch was written: speeds lose digits on the way into the file.
double written_density(const RecordedSegment& segment, const Waypoint& waypoint, double density) {
  const double unit = segment.motion->on_the_spot() ? radians_per_degree : 1.0;
  const double speed = planned_speed(segment, waypoint, density) / unit;
  const std::string text = file_number_below(speed);
  double written = speed;
  std::from_chars(text.data(), text.data() + text.size(), written);
  return density * speed / written;
}

/// Takes over what a check found still too fast. False if there is nothing (more) to lower.
bool lower(const PathResult& checked, const Recording& recording, const Path& path,
           std::vector<SegmentPlan>& plans, int round) {
  const std::vector<double> factors = slowdowns(checked);
  bool any = false;
  std::size_t at = 0;
  std::vector<std::pair<Stretch*, double>>
      found;  // every stretch of the path that may be changed, in its order
  for (std::size_t i = 0; i < plans.size(); ++i) {
    SegmentPlan& plan = plans[i];
    const std::size_t parts = std::max<std::size_t>(1, plan.stretches.size());
    for (std::size_t k = 0; k < parts; ++k) {
      const double factor = factors[at + k];
      const bool can = !plan.stretches.empty() && recording.segments[i].motion;
      found.emplace_back(can ? &plan.stretches[k] : nullptr, factor);
      if (!can || !(factor > 1)) continue;
      any = true;
      const SegmentResult& part = checked.segments[at + k];
      Stretch& stretch = plan.stretches[k];
      if (stretch.limit < 0) {
        stretch.limit = std::max(0, part.peak_axis);
        stretch.density = std::max(stretch.density, recording.segments[i].duration);
      }
      stretch.density = written_density(recording.segments[i], path.waypoints[i + 1], stretch.density) *
                        factor * (1 + extra);
    }
    at += parts;
  }
  // A corner's speed hangs on both sides; where lowering one alone has not helped, the other one follows.
  for (std::size_t i = 0; round >= 2 && i < found.size(); ++i) {
    if (!(found[i].second > 1)) continue;
    for (std::size_t other : {i - 1, i + 1}) {
      if (other >= found.size() || found[other].first == nullptr || found[other].second > 1) continue;
      if (found[i].first)
        found[other].first->limit = std::max(found[other].first->limit, found[i].first->limit);
      found[other].first->density *= found[i].second * (1 + extra);
      any = true;
    }
  }
  return any;
}

double programmed(const RecordedSegment& segment, const Waypoint& waypoint) {
  if (!segment.motion) return waypoint.joint_rate;
  if (!(segment.motion->leg_duration() > 0)) return waypoint.speed;
  return planned_speed(segment, waypoint, segment.duration);
}

/// What was written, segment by segment.
void account(const Recording& recording, const Path& path, const std::vector<SegmentPlan>& plans,
             const std::vector<std::vector<std::string>>& ids, Retiming& out) {
  std::size_t at = 0;
  double dwells = 0;
  for (std::size_t i = 0; i < plans.size(); ++i) {
    const RecordedSegment& recorded = recording.segments[i];
    const SegmentResult& old = recording.result.segments[i];
    const Waypoint& waypoint = path.waypoints[i + 1];
    RetimedSegment segment;
    segment.index = old.index;
    segment.from = old.from;
    segment.to = old.to;
    segment.move = old.move;
    segment.place = old.place;
    segment.turn_on_the_spot = old.turn_on_the_spot;
    segment.hopeless = recorded.hopeless;
    segment.old_speed = programmed(recorded, waypoint);
    segment.old_duration = old.duration;
    segment.bound = plans[i].bound;
    for (std::size_t k = 0; k < ids[i].size(); ++k, ++at) {
      const SegmentResult& part = out.after.segments[at];
      RetimedStretch stretch;
      stretch.to = ids[i][k];
      stretch.duration = part.duration;
      stretch.speed = segment.old_speed;
      if (!plans[i].stretches.empty()) {
        const Stretch& planned = plans[i].stretches[k];
        stretch.begin = planned.begin;
        stretch.end = planned.end;
        stretch.limit = planned.limit;
        stretch.where = planned.where;
        if (planned.limit >= 0) stretch.speed = planned_speed(recorded, waypoint, planned.density);
      }
      segment.new_duration += part.duration;
      segment.stretches.push_back(std::move(stretch));
    }
    dwells += waypoint.dwell;
    out.extra_waypoints += static_cast<int>(ids[i].size()) - 1;
    out.bound += segment.bound;
    out.segments.push_back(std::move(segment));
  }
  out.bound += dwells;
}

}  // namespace

std::vector<std::string> RetimeOptions::problems() const {
  std::vector<std::string> found;
  if (most_cuts < 0 || most_cuts > most_most_cuts)
    found.emplace_back("--most-cuts must be a whole number from 0 to 100");
  if (!(reserve >= 0 && reserve < 1))
    found.emplace_back("--reserve must be at least 0 and below 100 (percent)");
  return found;
}

bool RetimedSegment::changed() const {
  return std::ranges::any_of(stretches, [](const RetimedStretch& stretch) { return stretch.limit >= 0; });
}

Reading<Retiming> retime(const Recording& recording, const std::string& text, const Path& path,
                         const Cell& cell, const RetimeOptions& options, CheckObserver* progress) {
  Reading<Retiming> reading;
  Retiming out;
  out.before = recording.result;
  const std::vector<RateLimit> limits = rate_limits(cell, options.reserve);
  for (const RateLimit& limit : limits) out.limits.push_back(limit.name);
  std::vector<SegmentPlan> plans = plan_speeds(recording, path, limits, options);
  const Cell strict = with_reserve(cell, options.reserve);
  std::vector<std::vector<std::string>> ids;
  for (int round = 0; round < most_rounds; ++round) {
    out.text = write_plan(recording, text, path, cell, plans, ids);
    Reading<Path> written = parse_path(out.text, path.file, cell);
    if (!written.value) return {{}, std::move(written.faults)};
    Reading<PathResult> checked = check_path(*written.value, strict, options.check, progress);
    if (!checked.value) return {{}, std::move(checked.faults)};
    out.after = std::move(*checked.value);
    out.stopped = out.after.stopped;
    if (!out.stopped && lower(out.after, recording, path, plans, round)) continue;
    if (options.reserve > 0 && !out.stopped) {
      checked = check_path(*written.value, cell, options.check, progress);
      if (!checked.value) return {{}, std::move(checked.faults)};
      out.after = std::move(*checked.value);
    }
    break;
  }
  if (!out.stopped) account(recording, path, plans, ids, out);
  reading.value = std::move(out);
  return reading;
}

}  // namespace pathvet
