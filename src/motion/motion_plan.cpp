#include "pathvet/motion/motion_plan.hpp"

#include <algorithm>
#include <cmath>

namespace pathvet {
namespace {

/// A segment shorter than this does not move its TCP (mm), one that turns less does not turn (rad).
constexpr double no_length = 1e-9;
constexpr double no_turn = 1e-12;
/// Bounds of curves that have no closed one are sampled this often over the piece, and raised by
/// `sampled_raise`.
constexpr int bound_samples = 65;
constexpr double sampled_raise = 1.25;

Pose tool_placement(const Cell& cell, const Waypoint& waypoint) {
  return waypoint.tool ? cell.tools[static_cast<std::size_t>(*waypoint.tool)].placement : Pose{};
}

std::string trimmed(double millimetres) {
  std::string text = std::to_string(std::round(millimetres * 1000) / 1000);
  text.erase(text.find_last_not_of('0') + 1);
  if (text.back() == '.') text.pop_back();
  return text;
}

}  // namespace

MotionPlan::MotionPlan(const Path& path, const Cell& cell, Sources sources)
    : path_(path), cell_(cell), sources_(std::move(sources)) {}

Pose MotionPlan::frame_pose(int waypoint, double fraction) const {
  const Waypoint& w = path_.waypoints[static_cast<std::size_t>(waypoint)];
  if (!w.frame) return {};
  if (const auto moving = sources_.moving_frame(waypoint)) {
    CurvePoint point;
    moving->at(fraction, point);
    return point.pose;
  }
  return cell_.frames[static_cast<std::size_t>(*w.frame)].placement;
}

Pose MotionPlan::programmed(int waypoint) const {
  const Waypoint& w = path_.waypoints[static_cast<std::size_t>(waypoint)];
  return w.pose ? frame_pose(waypoint, 1.0) * *w.pose : sources_.taught_pose(waypoint);
}

/// Legs live in the world, or in the moving frame where there is one.
Pose MotionPlan::start_in_frame(int waypoint, const std::optional<Pose>& start) const {
  const auto i = static_cast<std::size_t>(waypoint);
  Pose world;
  if (start) {
    world = *start;
  } else {
    world = programmed(waypoint - 1);
    if (path_.waypoints[i].tool != path_.waypoints[i - 1].tool)
      world = world * tool_placement(cell_, path_.waypoints[i - 1]).inverse() *
              tool_placement(cell_, path_.waypoints[i]);
  }
  if (const auto moving = sources_.moving_frame(waypoint)) {
    CurvePoint frame;
    moving->at(0.0, frame);
    return frame.pose.inverse() * world;
  }
  return world;
}

Leg MotionPlan::leg(int waypoint, const std::optional<Pose>& start) const {
  const Waypoint& w = path_.waypoints[static_cast<std::size_t>(waypoint)];
  const bool moving = sources_.moving_frame(waypoint) != nullptr;
  const Pose outer = moving ? Pose{} : frame_pose(waypoint, 1.0);
  const Pose from = start_in_frame(waypoint, start);
  const Pose to = outer * *w.pose;
  Vector3 turn = rotation_vector(to.rotation * from.rotation.transpose());
  if (turn.norm() < no_turn) turn.setZero();
  if (w.move == Move::circular) {
    const Vector3 via = outer * *w.via;
    if (Leg::is_arc(from.position, via, to.position)) return Leg::arc(from, via, to.position, turn);
  }
  return Leg::line(from, to.position, turn);
}

MotionPlan::Shape MotionPlan::shape(int waypoint) const {
  const Waypoint& w = path_.waypoints[static_cast<std::size_t>(waypoint)];
  const Pose outer = sources_.moving_frame(waypoint) ? Pose{} : frame_pose(waypoint, 1.0);
  Shape out;
  out.turn = leg(waypoint).turn();
  if (w.move == Move::circular)
    out.is_arc =
        Leg::is_arc(start_in_frame(waypoint, {}).position, outer * *w.via, (outer * *w.pose).position);
  return out;
}

double MotionPlan::nominal_duration(int waypoint, const Leg& leg) const {
  const Waypoint& w = path_.waypoints[static_cast<std::size_t>(waypoint)];
  const double own =
      std::max(leg.length() < no_length ? 0.0 : leg.length() / w.speed, leg.turn() / w.turn_rate);
  if (own > 0 || cell_.positioners.empty()) return own;
  // Nothing moves in the frame: the positioners alone set the time, as a joint move would.
  const Waypoint& before = path_.waypoints[static_cast<std::size_t>(waypoint) - 1];
  double least = 0;
  for (std::size_t k = 0; k < cell_.positioners.size(); ++k) {
    const JointVector change = w.external[k] - before.external[k];
    for (int i = 0; i < change.size(); ++i)
      least = std::max(least,
                       std::abs(change[i]) /
                           (w.joint_rate * cell_.positioners[k].joints[static_cast<std::size_t>(i)].speed));
  }
  return least;
}

bool MotionPlan::same_carrier(int a, int b) const {
  const bool moving_a = sources_.moving_frame(a) != nullptr;
  const bool moving_b = sources_.moving_frame(b) != nullptr;
  if (!moving_a && !moving_b) return true;
  return moving_a && moving_b &&
         path_.waypoints[static_cast<std::size_t>(a)].frame ==
             path_.waypoints[static_cast<std::size_t>(b)].frame;
}

MotionPlan::Blend MotionPlan::blend(int waypoint) const {
  const auto i = static_cast<std::size_t>(waypoint);
  const Waypoint& w = path_.waypoints[i];
  if (w.blend <= 0 || waypoint == 0) return {};
  const auto none = [&](const std::string& why) {
    return Blend{0, "The blend at waypoint " + w.id + " is left out: " + why + "."};
  };
  if (i + 1 == path_.waypoints.size()) return none("the path ends there");
  const Waypoint& next = path_.waypoints[i + 1];
  if (w.move == Move::joint || next.move == Move::joint) return none("it is next to a joint move");
  if (w.dwell > 0) return none("the arm dwells there");
  if (w.tool != next.tool) return none("the tool changes there");
  if (w.orientation != next.orientation) return none("what binds of the orientation changes there");
  if (!same_carrier(waypoint, waypoint + 1)) return none("the moving frame changes there");
  const double before = leg(waypoint).length();
  const double after = leg(waypoint + 1).length();
  if (before < no_length || after < no_length) return none("it is next to a turn on the spot");
  const double size = std::min({w.blend, 0.5 * before, 0.5 * after});
  if (size == w.blend) return {size, ""};
  return {size, "The blend at waypoint " + w.id + " is clamped from " + trimmed(w.blend) + " mm to " +
                    trimmed(size) + " mm, half of the shorter segment beside it."};
}

std::vector<std::string> MotionPlan::notes() const {
  std::vector<std::string> out;
  for (int i = 1; i < static_cast<int>(path_.waypoints.size()); ++i) {
    Blend b = blend(i);
    if (!b.note.empty()) out.push_back(std::move(b.note));
  }
  return out;
}

Corner MotionPlan::corner(int waypoint, double size) const {
  const Leg in = leg(waypoint);
  const Leg out = leg(waypoint + 1);
  const double speed_in = in.length() / nominal_duration(waypoint, in);
  const double speed_out = out.length() / nominal_duration(waypoint + 1, out);
  CurvePoint a, b, middle;
  in.at(1 - size / in.length(), a);
  in.at(1, middle);
  out.at(size / out.length(), b);
  return {
      a.pose, a.first.head<3>().normalized(), middle.pose.rotation,  b.pose, b.first.head<3>().normalized(),
      size,   speed_in / (2 * size),          speed_out / (2 * size)};
}

SegmentMotion MotionPlan::segment(int waypoint, const std::optional<Pose>& start) const {
  SegmentMotion out;
  out.leg_ = leg(waypoint, start);
  out.moving_frame_ = sources_.moving_frame(waypoint);
  if (!out.moving_frame_) out.frame_ = frame_pose(waypoint, 1.0);
  const double length = out.leg_.length();
  const double duration = nominal_duration(waypoint, out.leg_);
  out.on_the_spot_ = length < no_length && out.leg_.turn() > 0;

  const double in = waypoint >= 2 && !start ? blend(waypoint - 1).size : 0.0;
  const double away = blend(waypoint).size;
  out.blend_in_ = in;
  out.blend_out_ = away;
  out.leg_duration_ = duration;
  std::array<double, SegmentMotion::most_pieces> times{};
  int count = 0;
  const auto add = [&](SegmentMotion::Piece piece, double time, double piece_length) {
    piece.length = piece_length;
    piece.length_before = out.length_;
    piece.rate = time;  // own unit over this piece; turned into a rate by fraction below
    out.length_ += piece_length;
    times[static_cast<std::size_t>(count)] = time;
    out.pieces_[static_cast<std::size_t>(count++)] = piece;
  };
  double begin = 0;
  double end = 1;
  if (in > 0) {
    out.corner_in_ = corner(waypoint - 1, in);
    const double time = out.corner_in_.duration() - out.corner_in_.half_time();
    SegmentMotion::Piece piece;
    piece.is_corner = piece.second_half = true;
    piece.from = out.corner_in_.half_time();
    add(piece, time, out.corner_in_.half_length(true));
    out.turn_ += out.corner_in_.half_turn(true);
    begin = in / length;
  }
  if (away > 0) end = 1 - away / length;
  SegmentMotion::Piece straight;
  straight.from = begin;
  if (end > begin || (in == 0 && away == 0)) add(straight, duration * (end - begin), length * (end - begin));
  out.turn_ += out.leg_.turn() * std::max(0.0, end - begin);
  if (away > 0) {
    out.corner_out_ = corner(waypoint, away);
    SegmentMotion::Piece piece;
    piece.is_corner = true;
    add(piece, out.corner_out_.half_time(), out.corner_out_.half_length(false));
    out.turn_ += out.corner_out_.half_turn(false);
  }
  out.piece_count_ = count;
  for (int i = 0; i < count; ++i) out.duration_ += times[static_cast<std::size_t>(i)];
  double time = 0;
  for (int i = 0; i < count; ++i) {
    SegmentMotion::Piece& piece = out.pieces_[static_cast<std::size_t>(i)];
    time += times[static_cast<std::size_t>(i)];
    const double from = out.piece_begin(i);
    piece.end = i + 1 == count || out.duration_ <= 0 ? 1.0 : time / out.duration_;
    const double own = piece.is_corner ? times[static_cast<std::size_t>(i)] : end - begin;
    piece.rate = own / (piece.end - from);
    if (!piece.is_corner && !out.moving_frame_) {
      piece.bounds = out.leg_.bounds();
      const double r2 = piece.rate * piece.rate;
      piece.bounds.second_linear *= r2;
      piece.bounds.second_angular *= r2;
      piece.bounds.third_linear *= r2 * piece.rate;
      piece.bounds.third_angular *= r2 * piece.rate;
      continue;
    }
    // No closed bound: the second derivative is smooth over the piece, so its greatest sampled value and
    // greatest sampled change stand in for it, raised by a quarter.
    CurvePoint last, now;
    const double h = (piece.end - from) / (bound_samples - 1);
    for (int k = 0; k < bound_samples; ++k) {
      out.at(i, from + k * h, now);
      CurveBounds& b = piece.bounds;
      b.second_linear = std::max(b.second_linear, sampled_raise * now.second.head<3>().norm());
      b.second_angular = std::max(b.second_angular, sampled_raise * now.second.tail<3>().norm());
      if (k > 0) {
        const Vector6 change = (now.second - last.second) / h;
        b.third_linear = std::max(b.third_linear, sampled_raise * change.head<3>().norm());
        b.third_angular = std::max(b.third_angular, sampled_raise * change.tail<3>().norm());
      }
      last = now;
    }
  }
  return out;
}

}  // namespace pathvet
