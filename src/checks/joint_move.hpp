#pragma once

#include <array>

#include "pathvet/checks/check_path.hpp"
#include "pathvet/kinematics/chain.hpp"
#include "pathvet/tracking/follower.hpp"

namespace pathvet {

/// A joint move: all joints go evenly from one configuration to another.
class JointMove final : public StepSampler {
 public:
  JointMove(const Arm& arm, const Chain& chain, const JointVector& from, const JointVector& to,
            double joint_rate);

  [[nodiscard]] double duration() const { return duration_; }     ///< s
  [[nodiscard]] double length() const { return length_[table]; }  ///< mm, of the TCP's way
  [[nodiscard]] double turn() const { return turn_; }             ///< rad
  [[nodiscard]] double length_at(double fraction) const;
  [[nodiscard]] JointVector joints(double fraction) const { return from_ + fraction * change_; }

  /// Sends the steps to a sink: samples so near that neither the TCP nor its orientation moves further than
  /// asked.
  void run(const FollowSettings& settings, TrackSink& sink) const;
  void at(const Step& step, double t, Node& out) const override;

 private:
  static constexpr std::size_t table = 64;  // stretches of the way's running length

  [[nodiscard]] Vector6 twist(double fraction) const;
  [[nodiscard]] double way(double from, double to) const;

  const Chain& chain_;
  JointVector from_, change_;
  double duration_ = 0;
  double turn_ = 0;
  std::array<double, table + 1> length_{};
};

}  // namespace pathvet
