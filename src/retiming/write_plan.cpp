#include <algorithm>
#include <cmath>
#include <set>

#include "pathvet/xml/rewrite.hpp"
#include "plan.hpp"

namespace pathvet {
namespace {

/// A tenth of what counts as touching a limit: 200 mm/s that came out as 199.99999999 is not cut to 199.999.
constexpr double hair = 1e-10;

/// Writes one segment's stretches: attributes of its waypoint, and waypoints before it.
class SegmentWriter {
 public:
  SegmentWriter(PathRewriter& rewriter, const RecordedSegment& segment, const Path& path, const Cell& cell,
                const SegmentPlan& plan, std::set<std::string>& ids)
      : rewriter_(rewriter),
        segment_(segment),
        cell_(cell),
        plan_(plan),
        ids_(ids),
        from_(path.waypoints[static_cast<std::size_t>(segment.index - 1)]),
        to_(path.waypoints[static_cast<std::size_t>(segment.index)]) {}

  /// Returns the ids of the stretches' ends.
  std::vector<std::string> write();

 private:
  using Attributes = std::map<std::string, std::string>;

  [[nodiscard]] Attributes speeds(const Stretch& stretch) const;
  [[nodiscard]] Pose in_frame(double parameter) const;
  void insert(const Stretch& stretch, const std::string& suffix) const;

  PathRewriter& rewriter_;
  const RecordedSegment& segment_;
  const Cell& cell_;
  const SegmentPlan& plan_;
  std::set<std::string>& ids_;
  const Waypoint& from_;
  const Waypoint& to_;
};

/// The attributes that give a stretch its speed.
SegmentWriter::Attributes SegmentWriter::speeds(const Stretch& stretch) const {
  Attributes out;
  if (plan_.keeps(stretch)) {
    for (const char* name : {"speed", "turn-rate"}) {
      if (const auto own = rewriter_.attribute(segment_.index, name)) out[name] = *own;
    }
    return out;
  }
  const double speed = planned_speed(segment_, to_, stretch.density) * (1 + hair);
  if (!segment_.motion) {
    out["joint-rate"] = file_number_below(100 * speed);
    return out;
  }
  const double turn_rate = segment_.motion->leg().turn() / segment_.motion->leg_duration() *
                           segment_.duration / stretch.density * (1 + hair);
  if (segment_.motion->on_the_spot()) {
    out["turn-rate"] = file_number_below(turn_rate / radians_per_degree);
    return out;
  }
  out["speed"] = file_number_below(speed);
  if (turn_rate > to_.turn_rate) {
    out["turn-rate"] = file_number_below(turn_rate / radians_per_degree);
  } else if (const auto own = rewriter_.attribute(segment_.index, "turn-rate")) {
    out["turn-rate"] = *own;
  }
  return out;
}

/// A place on the leg, in the waypoint's frame.
Pose SegmentWriter::in_frame(double parameter) const {
  const SegmentMotion& motion = *segment_.motion;
  CurvePoint point;
  motion.leg().at(parameter, point);
  return motion.has_moving_frame() ? point.pose : motion.frame(1.0).inverse() * point.pose;
}

void SegmentWriter::insert(const Stretch& stretch, const std::string& suffix) const {
  const SegmentMotion& motion = *segment_.motion;
  const double end = leg_parameter(motion, stretch.end);
  PathRewriter::Insertion insertion;
  insertion.suffix = suffix;
  insertion.attributes = speeds(stretch);
  if (rewriter_.attribute(-1, "blend")) insertion.attributes["blend"] = "0";
  insertion.pose = in_frame(end);
  insertion.same_orientation = motion.leg().turn() == 0;
  if (to_.move == Move::circular) {
    const double begin = stretch.begin > 0 ? leg_parameter(motion, stretch.begin) : 0.0;
    insertion.via = in_frame(0.5 * (begin + end)).position;
  }
  for (std::size_t i = 0; i < to_.external.size(); ++i) {
    const JointVector change = to_.external[i] - from_.external[i];
    if (change.isZero(0)) {
      insertion.external.emplace_back();
    } else {
      insertion.external.emplace_back(JointVector(from_.external[i] + stretch.end * change));
    }
  }
  rewriter_.insert_before(segment_.index, insertion, cell_);
}

std::vector<std::string> SegmentWriter::write() {
  std::vector<std::string> written;
  int number = 0;
  for (const Stretch& stretch : plan_.stretches) {
    if (&stretch == &plan_.stretches.back()) break;
    std::string suffix;
    do {
      suffix = '.' + std::to_string(++number);
    } while (!ids_.insert(to_.id + suffix).second);
    insert(stretch, suffix);
    written.push_back(to_.id + suffix);
  }
  written.push_back(to_.id);
  if (plan_.stretches.empty()) return written;
  const Stretch& last = plan_.stretches.back();
  if (!plan_.keeps(last)) {
    for (const auto& [name, value] : speeds(last)) rewriter_.set_attribute(segment_.index, name, value);
  }
  if (to_.move == Move::circular && plan_.stretches.size() > 1)
    rewriter_.set_via(segment_.index,
                      in_frame(0.5 * (leg_parameter(*segment_.motion, last.begin) + 1)).position);
  return written;
}

}  // namespace

std::string write_plan(const Recording& recording, const std::string& text, const Path& path,
                       const Cell& cell, const std::vector<SegmentPlan>& plans,
                       std::vector<std::vector<std::string>>& ids) {
  PathRewriter rewriter(text);
  std::set<std::string> taken;
  for (const Waypoint& waypoint : path.waypoints) taken.insert(waypoint.id);
  ids.clear();
  for (std::size_t i = 0; i < plans.size(); ++i)
    ids.push_back(SegmentWriter(rewriter, recording.segments[i], path, cell, plans[i], taken).write());
  return rewriter.text();
}

}  // namespace pathvet
