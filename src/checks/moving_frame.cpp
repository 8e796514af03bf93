#include "moving_frame.hpp"

namespace pathvet {

Arm as_arm(const Positioner& positioner) {
  Arm arm;
  arm.name = positioner.name;
  arm.base = positioner.base;
  arm.joints = positioner.joints;
  arm.flange = positioner.flange;
  return arm;
}

CarriedFrame::CarriedFrame(const Positioner& positioner, const Pose& placement, const JointVector& from,
                           const JointVector& to)
    : chain_(as_arm(positioner), placement), from_(from), change_(to - from) {}

void CarriedFrame::at(double fraction, CurvePoint& out) const {
  ChainState<Eigen::Dynamic> state;
  chain_.evaluate<Eigen::Dynamic>(JointVector(from_ + fraction * change_), state);
  Jacobian jacobian;
  chain_.jacobian<Eigen::Dynamic>(state, jacobian);
  out.pose = state.tcp;
  out.first = jacobian * change_;
  out.second = chain_.bias<Eigen::Dynamic>(state, change_);
}

}  // namespace pathvet
