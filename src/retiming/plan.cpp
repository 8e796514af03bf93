#include "plan.hpp"

#include <algorithm>
#include <cmath>

#include "pathvet/retiming/corners.hpp"

namespace pathvet {
namespace {

/// Cuts nearer to each other than these are of no use on a pendant.
constexpr double least_length = 0.01;                     // mm
constexpr double least_turn = 0.01 * radians_per_degree;  // rad; one of the two is enough
constexpr int corner_sweeps = 4;
constexpr int most_passes =
    1000;  // a handful is usual; what they left over the check on the written path would find

int leg_piece(const SegmentMotion& motion) {
  for (int piece = 0; piece < motion.piece_count(); ++piece) {
    if (!motion.is_corner(piece)) return piece;
  }
  return -1;
}

bool moves_positioner(const RecordedSegment& segment) {
  return std::ranges::any_of(segment.external, [](double change) { return change != 0; });
}

/// Where cuts may be: so far from a rounded end that the blend keeps its size.
void bound_cuts(const RecordedSegment& segment, StretchOptions& options) {
  const SegmentMotion& motion = *segment.motion;
  const double in = motion.blend_in();
  const double out = motion.blend_out();
  const double length = motion.leg().length();
  const bool rounded = in > 0 || out > 0;
  if (leg_piece(motion) < 0 || (rounded && (moves_positioner(segment) || motion.has_moving_frame()))) {
    options.most_cuts = 0;
    return;
  }
  if (in > 0) options.first_cut = leg_fraction(motion, 2 * in / length);
  if (out > 0) options.last_cut = leg_fraction(motion, 1 - 2 * out / length);
  const double whole = std::max(length / least_length, motion.leg().turn() / least_turn);
  options.least = whole > 1 ? 1 / whole : 1;
}

double leg_speed(const RecordedSegment& segment) {
  return segment.motion->leg().length() / segment.motion->leg_duration();
}

/// Speed on the leg <-> density.
double to_speed(const RecordedSegment& segment, double density) {
  return density > 0 ? leg_speed(segment) * segment.duration / density : HUGE_VAL;
}
double to_density(const RecordedSegment& segment, double speed) {
  return leg_speed(segment) * segment.duration / speed;
}

/// A rounded corner with the two stretches that it joins.
struct Meeting {
  CornerLimits limits;
  std::size_t in = 0, out = 0;  // segments
};

/// A stretch's speed changed for the sake of a corner.
void set_speed(const RecordedSegment& segment, Stretch& stretch, double speed, int limit, double where) {
  stretch.density = to_density(segment, speed);
  stretch.limit = limit;
  stretch.where = where;
}

/// What a stretch could run at if there were no corners.
double free_density(const Density& legs, const SegmentPlan& plan, const Stretch& stretch) {
  return std::max(plan.floor, legs.peak(stretch.begin, stretch.end).value);
}

void settle_corners(const Recording& recording, const std::vector<Meeting>& corners,
                    const std::vector<Density>& legs, std::vector<SegmentPlan>& plans) {
  const auto before = [&](const Meeting& c) -> Stretch& { return plans[c.in].stretches.back(); };
  const auto after = [&](const Meeting& c) -> Stretch& { return plans[c.out].stretches.front(); };
  const auto speed_before = [&](const Meeting& c) {
    return to_speed(recording.segments[c.in], before(c).density);
  };
  const auto speed_after = [&](const Meeting& c) {
    return to_speed(recording.segments[c.out], after(c).density);
  };
  // Down: each side holds if both have the corner's common speed; different speeds may still break an
  // acceleration.
  for (int pass = 0; pass < most_passes; ++pass) {
    bool again = false;
    for (const Meeting& c : corners) {
      const double v1 = speed_before(c);
      const double v2 = speed_after(c);
      if (c.limits.holds(v1, v2) || v1 == v2) continue;
      again = true;
      if (v1 > v2) {
        const double v = std::max(v2, std::min(c.limits.most_before(v2, v1), v1 * (1 - 1e-9)));
        set_speed(recording.segments[c.in], before(c), v, c.limits.common_limit(), 1);
      } else {
        const double v = std::max(v1, std::min(c.limits.most_after(v1, v2), v2 * (1 - 1e-9)));
        set_speed(recording.segments[c.out], after(c), v, c.limits.common_limit(), 0);
      }
    }
    if (!again) break;
  }
  // Up: what a corner's slower side leaves free goes to the faster one.
  for (int sweep = 0; sweep < corner_sweeps; ++sweep) {
    for (std::size_t i = 0; i < plans.size(); ++i) {
      for (Stretch& stretch : plans[i].stretches) {
        const RecordedSegment& segment = recording.segments[i];
        const Density::Peak peak = legs[i].peak(stretch.begin, stretch.end);
        const double now = to_speed(segment, stretch.density);
        double wanted = to_speed(segment, free_density(legs[i], plans[i], stretch));
        if (!(wanted > now) || !std::isfinite(wanted)) continue;
        int limit = peak.value > plans[i].floor ? peak.limit : -1;
        double where = peak.fraction;
        bool touched = false;
        for (const Meeting& c : corners) {
          const bool first = c.out == i && &after(c) == &stretch;
          const bool last = c.in == i && &before(c) == &stretch;
          if (!first && !last) continue;
          touched = true;
          const double most = first ? c.limits.most_after(speed_before(c), wanted)
                                    : c.limits.most_before(speed_after(c), wanted);
          if (most >= wanted) continue;
          wanted = most;
          limit = c.limits.common_limit();
          where = first ? 0 : 1;
        }
        if (touched && wanted > now) set_speed(segment, stretch, wanted, limit, where);
      }
    }
  }
}

}  // namespace

double leg_parameter(const SegmentMotion& motion, double fraction) {
  const int piece = leg_piece(motion);
  const double length = motion.leg().length();
  const double from = motion.blend_in() > 0 ? motion.blend_in() / length : 0.0;
  const double to = motion.blend_out() > 0 ? 1 - motion.blend_out() / length : 1.0;
  const double begin = motion.piece_begin(piece);
  return from + (fraction - begin) / (motion.piece_end(piece) - begin) * (to - from);
}

double leg_fraction(const SegmentMotion& motion, double parameter) {
  const int piece = leg_piece(motion);
  const double length = motion.leg().length();
  const double from = motion.blend_in() > 0 ? motion.blend_in() / length : 0.0;
  const double to = motion.blend_out() > 0 ? 1 - motion.blend_out() / length : 1.0;
  const double begin = motion.piece_begin(piece);
  return begin + (parameter - from) / (to - from) * (motion.piece_end(piece) - begin);
}

double planned_speed(const RecordedSegment& segment, const Waypoint& waypoint, double density) {
  if (!segment.motion) return waypoint.joint_rate * segment.duration / density;
  const Leg& leg = segment.motion->leg();
  const double way = segment.motion->on_the_spot() ? leg.turn() : leg.length();
  return way / segment.motion->leg_duration() * segment.duration / density;
}

std::vector<SegmentPlan> plan_speeds(const Recording& recording, const Path& /*path*/,
                                     const std::vector<RateLimit>& limits, const RetimeOptions& options) {
  const std::size_t count = recording.segments.size();
  std::vector<SegmentPlan> plans(count);
  std::vector<Density> legs(count);
  std::vector<Meeting> corners;
  std::vector<double> first(count, 0.0), last(count, 0.0);
  for (std::size_t i = 0; i + 1 < count; ++i) {
    const RecordedSegment& in = recording.segments[i];
    const RecordedSegment& out = recording.segments[i + 1];
    if (!in.hopeless.empty() || !out.hopeless.empty() || !(in.duration > 0) || !(out.duration > 0)) continue;
    auto corner = CornerLimits::between(in, out, limits);
    if (!corner) continue;
    last[i] = to_density(in, corner->common_speed());
    first[i + 1] = to_density(out, corner->common_speed());
    corners.push_back({std::move(*corner), i, i + 1});
  }
  for (std::size_t i = 0; i < count; ++i) {
    const RecordedSegment& segment = recording.segments[i];
    SegmentPlan& plan = plans[i];
    plan.bound = segment.duration;
    plan.floor = options.faster ? 0.0 : segment.duration;
    if (!segment.hopeless.empty() || !(segment.duration > 0)) continue;
    const SegmentResult& checked = recording.result.segments[i];
    if (!segment.motion) {
      // A joint move holds the arm's limits by construction; a positioner's joints may still be too fast.
      if (!(checked.peak_ratio > 1)) continue;
      plan.floor = segment.duration;
      plan.stretches = {{0, 1, segment.duration * checked.peak_ratio, checked.peak_axis, 0}};
      continue;
    }
    plan.bound = needed_density(segment, limits, false, false).integral(plan.floor);
    legs[i] = needed_density(segment, limits, true, true);
    StretchOptions stretch_options;
    stretch_options.most_cuts = options.most_cuts;
    stretch_options.floor = plan.floor;
    stretch_options.first_floor = first[i];
    stretch_options.last_floor = last[i];
    bound_cuts(segment, stretch_options);
    plan.stretches = best_stretches(legs[i], stretch_options);
    if (std::ranges::any_of(plan.stretches, [](const Stretch& s) { return !(s.density > 0); }))
      plan.stretches.clear();  // nothing bounds it
  }
  std::erase_if(corners, [&](const Meeting& c) {
    return plans[c.in].stretches.empty() || plans[c.out].stretches.empty();
  });
  settle_corners(recording, corners, legs, plans);
  return plans;
}

}  // namespace pathvet
