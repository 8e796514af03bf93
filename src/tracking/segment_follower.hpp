#pragma once

#include "pathvet/tracking/arc_tracker.hpp"
#include "pathvet/tracking/follower.hpp"
#include "pathvet/tracking/task.hpp"

namespace pathvet {

inline constexpr double least_share = 1.0 / 32;  ///< of the nominal step; below it the arc takes over
inline constexpr double calm_share = 1.0 / 8;    ///< and above it hands back

template <int N>
class SegmentFollower final : public Follower {
 public:
  SegmentFollower(const ArmContext& context, const SegmentMotion& motion, const FollowSettings& settings);

  End run(const JointVector& q, bool reached, std::string& branch, TrackSink& sink) override;
  void at(const Step& step, double t, Node& out) const override;

 private:
  enum class Outcome {
    end,       ///< the piece's end is reached
    singular,  ///< no proven step by the fraction is worth its while here
    calm,      ///< far enough from the singularity to step by the fraction again
    lost,      ///< the branch ends here, or the pose cannot be held beyond
    stopped    ///< the sink asked to stop
  };
  using State = TaskState<N>;

  Outcome begin_piece(State& state, TrackSink& sink);
  Outcome follow_fraction(State& state, TrackSink& sink);
  Outcome take_steps(State*& now, State*& ahead, TrackSink& sink);
  Outcome follow_arc(State& state, const std::optional<ArcTracker::Unknowns>& sense, TrackSink& sink);
  Outcome follow_damped(State& state, TrackSink& sink);
  Outcome cross_meeting(ArcTracker& arc, const ArcTracker::Meeting& meeting, TrackSink& sink);
  Outcome restart(State& state, TrackSink& sink);
  Outcome recover(State& state, std::optional<ArcTracker::Unknowns>& sense, TrackSink& sink);
  bool back_in_reach(State& state, double lost_at, double unreached, double reached, const JointVector& left,
                     std::optional<ArcTracker::Unknowns>& sense);

  [[nodiscard]] bool converge(State& state) const { return converge(piece_, state); }
  [[nodiscard]] bool converge(int piece, State& state) const;
  [[nodiscard]] bool regular(State& state) const;
  [[nodiscard]] bool within_tolerance(const State& state) const;
  [[nodiscard]] bool exactly_singular(const State& state) const;
  [[nodiscard]] Pose pose_at(double fraction) const;
  [[nodiscard]] double scaled_speed(double fraction) const;
  [[nodiscard]] Node node(const State& state) const;
  [[nodiscard]] double spacing(int piece) const;
  [[nodiscard]] double affordable(const State& state) const;
  bool land(double fraction, double ahead, const JointVector& target, State& landed) const;
  bool emit(const Step& step, const State& at_end, TrackSink& sink) const;
  bool emit_crossing(const Step& step, TrackSink& sink) const;
  void adopt(State& state, double fraction, const JointVector& q) const;

  ArmContext context_;
  const SegmentMotion& motion_;
  FollowSettings settings_;
  Task<N> task_;
  Task<Eigen::Dynamic> general_;
  int piece_ = 0;
  double end_ = 1;
  double spacing_ = 1;  // of the fraction, in this piece
  std::string signs_;   // of the branch that is followed
  bool lost_ = false;   // out of reach, and the sink knows
};

}  // namespace pathvet
