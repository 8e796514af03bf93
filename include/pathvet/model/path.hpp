#pragma once

#include <optional>
#include <string>
#include <vector>

#include "pathvet/model/cell.hpp"

namespace pathvet {

/// Where something stands in an input file; both count from 1.
struct SourcePlace {
  int line = 0;
  int column = 0;
};

enum class Move { start, linear, circular, joint };

/// What of a pose's orientation binds: all, the direction of the tool's z axis, nothing.
enum class Orientation { full, axis, free };

/// A waypoint with the path's defaults already filled in. A segment is the motion that ends at it.
struct Waypoint {
  std::string id;
  SourcePlace place;  ///< of the element's tag
  Move move = Move::start;
  std::optional<JointVector> joints;  ///< taught configuration (or a joint move's target), rad or mm
  std::optional<Pose> pose;           ///< of the TCP, in the waypoint's frame
  std::optional<Vector3> via;         ///< circular moves: a point of the arc, in the waypoint's frame, mm
  std::optional<int> tool;            ///< index into Cell::tools; none: the flange is the TCP
  std::optional<int> frame;           ///< index into Cell::frames; none: the world
  Orientation orientation = Orientation::full;
  double speed = 0;       ///< programmed TCP speed, mm/s
  double turn_rate = 0;   ///< rad/s
  double joint_rate = 1;  ///< share of the joint speeds, in (0, 1]
  double blend = 0;       ///< mm
  double dwell = 0;       ///< s
  /// Values of each positioner's joints (index as Cell::positioners), rad or mm; empty where the cell has
  /// none.
  std::vector<JointVector> external;
};

/// A path file as read: at least two waypoints, const after construction.
struct Path {
  std::string file;  ///< as given by the user
  std::string name;
  std::string cell_file;  ///< as opened
  std::vector<Waypoint> waypoints;
};

}  // namespace pathvet
