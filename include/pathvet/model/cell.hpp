#pragma once

#include <optional>
#include <string>
#include <vector>

#include "pathvet/model/arm.hpp"

namespace pathvet {

/// A driven table or track that carries frames (or tools): base * joints * flange in the world.
struct Positioner {
  std::string name;
  Pose base;
  std::vector<Joint> joints;
  Pose flange;
};

/// A tool: pose of its TCP in the arm's flange.
struct Tool {
  std::string name;
  Pose placement;
};

/// A work frame: its pose in the world, or in the flange of the positioner that carries it.
struct Frame {
  std::string name;
  Pose placement;
  std::optional<int> carried_by;  ///< index into Cell::positioners
};

/// A cell file as read: const after construction.
struct Cell {
  std::string file;  ///< as opened
  std::string name;
  Arm arm;
  std::vector<Tool> tools;
  std::vector<Frame> frames;
  std::vector<Positioner> positioners;
  std::optional<JointVector> home;
};

}  // namespace pathvet
