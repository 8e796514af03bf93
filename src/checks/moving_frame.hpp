#pragma once

#include "pathvet/kinematics/chain.hpp"
#include "pathvet/model/cell.hpp"
#include "pathvet/motion/segment_motion.hpp"

namespace pathvet {

/// A positioner as an arm whose flange carries something.
[[nodiscard]] Arm as_arm(const Positioner& positioner);

/// A frame on a positioner whose joints go evenly from one waypoint's values to the next one's.
class CarriedFrame final : public MovingFrame {
 public:
  CarriedFrame(const Positioner& positioner, const Pose& placement, const JointVector& from,
               const JointVector& to);
  void at(double fraction, CurvePoint& out) const override;

 private:
  Chain chain_;
  JointVector from_, change_;
};

}  // namespace pathvet
