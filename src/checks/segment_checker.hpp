#pragma once

#include <functional>

#include "axis.hpp"
#include "pathvet/checks/check_path.hpp"
#include "pathvet/kinematics/branches.hpp"
#include "pathvet/tracking/follower.hpp"
#include "point_speeds.hpp"
#include "signal.hpp"

namespace pathvet {

/// What one axis did on one segment.
struct AxisTally {
  double min = 0, max = 0;
  double peak_speed = 0;  // with sign
  double peak_ratio = 0;
  double travel = 0;
  bool any = false;
};

/// What the checks of one segment need to know of it.
struct SegmentContext {
  const ArmContext& arm;
  const std::vector<Axis>& axes;
  const CheckOptions& options;
  int index = 0;
  double duration = 0;     // s
  bool cartesian = true;   // Cartesian moves alone are checked for speed margins and singular passes
  double path_length = 0;  // mm travelled before this segment
  double path_time = 0;    // s passed before it
  std::function<double(double fraction)> length_at;  // mm from the segment's begin
  std::function<Pose(double fraction)> frame;        // of the waypoint, in the world
  std::function<Pose(double fraction)> target;       // of the TCP in the world (Cartesian moves)
};

/// Receives the steps of one segment and turns them into findings and tallies. Every begin, end and peak is
/// found on the exact curve.
class SegmentChecker final : public TrackSink {
 public:
  SegmentChecker(const SegmentContext& context, const StepSampler& sampler, CheckObserver* observer);

  bool step(const Step& step, double position_residual, double orientation_residual) override;
  void flip(double fraction, const Node& before, const Node& after) override;
  void jump(double fraction, const JointVector& from, const JointVector& to) override;
  void lost(double fraction, const JointVector& last) override;
  void regained(double fraction, const JointVector& at) override;

  /// Closes what is open at the segment's end and applies the rules on bordering findings.
  void finish();

  [[nodiscard]] std::vector<Finding>& findings() { return findings_; }
  [[nodiscard]] const std::vector<AxisTally>& tallies() const { return tallies_; }
  [[nodiscard]] std::optional<double> min_singular_value() const { return min_singular_; }
  [[nodiscard]] long samples() const { return samples_; }
  [[nodiscard]] double proven_length() const { return proven_length_; }
  [[nodiscard]] double position_residual() const { return position_residual_; }
  [[nodiscard]] double orientation_residual() const { return orientation_residual_; }
  [[nodiscard]] double peak_tcp_speed() const {
    return fastest_[static_cast<std::size_t>(points_.count() - 1)];
  }
  /// Index and speed (mm/s) of the fastest joint centre; -1 where there is none but the TCP.
  [[nodiscard]] std::pair<int, double> fastest_point() const;
  [[nodiscard]] std::string point_name(int point) const { return points_.name(point); }
  [[nodiscard]] const std::vector<double>& ratio_profile() const { return ratio_profile_; }
  void add(Finding finding);

 private:
  /// A condition that is watched along the segment: an open stretch, its worst place so far, and whether a
  /// matching error was met on it.
  struct Watch {
    Code code = Code::joint_limit;
    int axis = -1;
    int point = -1;    // of PointSpeeds, for arm speeds
    double sign = 1;   // of the limit's side, or of the speed
    double limit = 0;  // as reported
    double level = 0;  // beyond it the condition holds
    bool open = false;
    bool tainted = false;
    double begin = 0;
    double peak = 0;
    double score = 0;  // how bad the peak is
    double least = 0;  // a stretch whose score stays below is dropped (touching a margin)
    bool unbounded = false;
    JointVector joints;
  };

  void check_axis(std::size_t index, const Step& step);
  void check_acceleration(Watch& watch, const Axis& axis, const Step& step, double hair);
  void tally(std::size_t index, const Step& step);
  void check_points(const Step& step);
  void check_singular(const Step& step);
  void lowest_singular(const Step& step, double at_begin, double at_end);
  void check_proof(const Step& step);
  void trace(const Step& step, double position_residual, double orientation_residual);
  void show_extreme(const Step& step, const Node& node);
  template <typename F>
  void with_sample(const Step& step, const Node& node, double position_residual, double orientation_residual,
                   F tell);
  [[nodiscard]] bool is_traced() const { return observer_ && observer_->wants_samples(); }
  template <typename F, typename D, typename S, typename E>
  void watch_step(Watch& watch, const Step& step, F value, D slope, double bound, S score, E score_slope);
  void widen(Watch& watch, const Node& node, double score);
  void open(Watch& watch, const Node& node);
  void close(Watch& watch, double fraction);
  void close_all(double fraction);
  [[nodiscard]] Finding finding(Code code, int axis, double begin, double end, double peak,
                                const JointVector& joints) const;
  [[nodiscard]] double singular_value(const JointVector& q) const;
  [[nodiscard]] double third_bound(const Axis& axis, const Step& step) const;

  const SegmentContext& context_;
  const StepSampler& sampler_;
  CheckObserver* observer_;
  std::vector<Watch> watches_;
  std::vector<std::pair<std::size_t, std::size_t>> watch_range_;  // of each axis
  std::vector<Watch> point_watches_;  // one a point, if a reduced speed is asked for
  PointSpeeds points_;
  std::array<double, max_joints> fastest_{};  // mm/s, of each point
  Watch singular_;
  Watch unproven_;
  std::vector<AxisTally> tallies_;
  std::vector<Finding> findings_;
  std::vector<double> ratio_profile_;
  std::optional<double> min_singular_;
  std::optional<double> singular_at_begin_;  // exact value at the current step's begin, if computed
  std::optional<Step> before_;  // the step before, while a lowest singular value is being bracketed
  bool falling_ = false;        // the step before ended at the lowest singular value so far
  bool anew_ = false;           // the next step doesn't begin where the one before ended
  bool fresh_ = true;           // the next step does not begin where the last one ended
  long samples_ = 0;
  double proven_length_ = 0;
  double position_residual_ = 0, orientation_residual_ = 0;
  std::optional<double> lost_at_;
  JointVector lost_joints_;
  double rate_scale_ = 0;  // 1 / duration, 0 where nothing moves
};

}  // namespace pathvet
