#pragma once

#include <deque>
#include <map>
#include <memory>

#include "joint_move.hpp"
#include "pathvet/checks/check_path.hpp"
#include "pathvet/motion/motion_plan.hpp"
#include "segment_checker.hpp"

namespace pathvet {

/// An arm with one of the cell's tools and what of the orientation binds: the analyses that all segments with
/// them share.
struct ToolContext {
  ToolContext(const Arm& arm, const Pose& tool, Orientation orientation);

  Chain chain;
  ConfigurationFinder finder;
  BranchAnalysis branches;
  ArmContext arm;
};

/// Checks one path from one start. Made anew for every run.
class PathChecker {
 public:
  PathChecker(const Path& path, const Cell& cell, const CheckOptions& options, CheckObserver* observer);

  /// What only the forward map can tell is wrong with the path.
  [[nodiscard]] std::vector<Fault> faults();
  /// Start configurations to choose from where the path gives none: all inside the limits, whole turns
  /// included; if there are none, all.
  [[nodiscard]] std::vector<JointVector> starts();
  /// Whether starts() holds every configuration of the start pose.
  [[nodiscard]] bool starts_complete();
  /// The start that the path gives (its joints, made exact where a pose stands beside them).
  [[nodiscard]] std::optional<JointVector> taught_start();
  [[nodiscard]] PathResult run(const JointVector& start, bool reached, bool taught);

 private:
  struct Arrival {
    JointVector q;
    bool reached = true;
  };

  [[nodiscard]] const ToolContext& context(int waypoint);
  [[nodiscard]] const ToolContext& context(std::optional<int> tool, Orientation orientation);
  [[nodiscard]] const Waypoint& waypoint(int index) const {
    return path_.waypoints[static_cast<std::size_t>(index)];
  }
  Arrival joint_segment(int index, const Arrival& from, PathResult& result);
  Arrival cartesian_segment(int index, const Arrival& from, PathResult& result);
  [[nodiscard]] std::optional<JointVector> joint_target(int index, const JointVector& from);
  [[nodiscard]] std::optional<JointVector> exact_at(int index, const JointVector& near);
  [[nodiscard]] std::optional<JointVector> drift(int index, const JointVector& arrived);
  void taught_mismatch(int index, const JointVector& arrived, const SegmentContext& context,
                       SegmentChecker& checker);
  void absorb(int index, SegmentResult segment, SegmentChecker& checker, const SegmentContext& context,
              const JointVector& begin, const JointVector& end, PathResult& result);
  [[nodiscard]] Pose frame_at_arrival(int index) const;

  const Path& path_;
  const Cell& cell_;
  CheckOptions options_;
  CheckObserver* observer_;
  std::vector<Axis> axes_;
  std::vector<Axis> positioner_axes_;
  std::map<std::pair<int, int>, std::unique_ptr<ToolContext>> contexts_;
  MotionPlan plan_;
  struct Visit {
    std::optional<int> tool;
    Pose pose;
    JointVector joints;
  };
  std::deque<Visit> visits_;  // of redundant arms, the latest last
  std::string branch_;
  double proven_length_ = 0, cartesian_length_ = 0;
};

}  // namespace pathvet
