#pragma once

#include <functional>

#include "pathvet/motion/segment_motion.hpp"

namespace pathvet {

/// Turns the waypoints of a path into motions, one segment at a time. What needs the forward map comes in
/// from outside: the poses that joints lead to, and moving frames.
class MotionPlan {
 public:
  struct Sources {
    /// Pose in the world of waypoint i's TCP at its taught joints.
    std::function<Pose(int waypoint)> taught_pose;
    /// The frame of waypoint `waypoint` while its segment runs, where a positioner carries it; null
    /// otherwise.
    std::function<std::shared_ptr<const MovingFrame>(int waypoint)> moving_frame;
  };

  MotionPlan(const Path& path, const Cell& cell, Sources sources);

  /// The Cartesian segment that ends at waypoint `waypoint` (>= 1). `start`: pose in the world of this
  /// segment's tool where it is not the programmed one (after a waypoint whose orientation was left free).
  [[nodiscard]] SegmentMotion segment(int waypoint, const std::optional<Pose>& start = {}) const;

  /// Pose in the world that waypoint i programmes for its own tool: its pose, else that of its taught joints.
  [[nodiscard]] Pose programmed(int waypoint) const;

  /// How far a Cartesian segment's orientation turns (rad), and whether a circular one's points carry a
  /// circle.
  struct Shape {
    double turn = 0;
    bool is_arc = true;
  };
  [[nodiscard]] Shape shape(int waypoint) const;

  /// Complete sentences on blends that were clamped or left out.
  [[nodiscard]] std::vector<std::string> notes() const;

 private:
  struct Blend {
    double size = 0;  // mm; 0: none
    std::string note;
  };

  [[nodiscard]] Pose frame_pose(int waypoint, double fraction) const;
  [[nodiscard]] Pose start_in_frame(int waypoint, const std::optional<Pose>& start) const;
  [[nodiscard]] Leg leg(int waypoint, const std::optional<Pose>& start = {}) const;
  [[nodiscard]] double nominal_duration(int waypoint, const Leg& leg) const;
  [[nodiscard]] Blend blend(int waypoint) const;
  [[nodiscard]] Corner corner(int waypoint, double size) const;
  [[nodiscard]] bool same_carrier(int a, int b) const;

  const Path& path_;
  const Cell& cell_;
  Sources sources_;
};

}  // namespace pathvet
