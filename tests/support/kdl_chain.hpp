#pragma once

#include <kdl/chain.hpp>

#include "support/kdl_frames.hpp"
#include "support/random_arm.hpp"

namespace pathvet::test {

/// The same arm by Orocos KDL's own link constructors (a KDL joint moves first and steps to its tip frame
/// after).
inline KDL::Chain to_kdl(const LinkArm& arm) {
  const auto fixed = [](const KDL::Frame& frame) {
    return KDL::Segment(KDL::Joint(KDL::Joint::Fixed), frame);
  };
  KDL::Chain chain;
  chain.addSegment(fixed(to_kdl(arm.base)));
  for (const Link& link : arm.links) {
    const bool turns = link.type == JointType::revolute;
    const KDL::Joint about_z(turns ? KDL::Joint::RotZ : KDL::Joint::TransZ);
    switch (link.form) {
      case Link::Form::distal:
        chain.addSegment(KDL::Segment(about_z, KDL::Frame::DH(link.a, link.alpha, link.d, link.theta)));
        break;
      case Link::Form::proximal:
        chain.addSegment(fixed(KDL::Frame::DH_Craig1989(link.a, link.alpha, link.d, link.theta)));
        chain.addSegment(KDL::Segment(about_z));
        break;
      case Link::Form::mount: {
        const KDL::Frame placement = to_kdl(link.placement);
        const KDL::Joint joint(placement.p, placement.M * to_kdl(link.axis),
                               turns ? KDL::Joint::RotAxis : KDL::Joint::TransAxis);
        chain.addSegment(KDL::Segment(joint, placement));
        break;
      }
    }
  }
  chain.addSegment(fixed(to_kdl(arm.flange) * to_kdl(arm.tool)));
  return chain;
}

}  // namespace pathvet::test
