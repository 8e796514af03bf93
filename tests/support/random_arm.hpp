#pragma once

#include <cmath>
#include <vector>

#include "pathvet/model/arm.hpp"
#include "pathvet/model/units.hpp"
#include "support/seed.hpp"

namespace pathvet::test {

inline Vector3 random_direction(Random& random) {
  return Vector3(random.normal(), random.normal(), random.normal()).normalized();
}

inline Pose random_pose(Random& random, double reach) {
  return {rotation_from_vector(random.uniform(0, pi) * random_direction(random)),
          random.uniform(0, reach) * random_direction(random)};
}

/// One link in one of the three ways that a cell file may write it (contract: the cell file).
struct Link {
  enum class Form { distal, proximal, mount };
  Form form = Form::distal;
  JointType type = JointType::revolute;
  double theta = 0, d = 0, a = 0, alpha = 0;  ///< distal, proximal: rad and mm
  Pose placement;                             ///< mount
  Vector3 axis = Vector3::UnitZ();            ///< mount
};

/// An arm still in the words of its links, to be built both here and by an outside library.
struct LinkArm {
  Pose base;
  std::vector<Link> links;
  Pose flange;
  Pose tool;
};

inline LinkArm random_link_arm(Random& random, int joints) {
  LinkArm arm;
  arm.base = random_pose(random, 1000);
  for (int i = 0; i < joints; ++i) {
    Link link;
    link.form = static_cast<Link::Form>(random.integer(0, 2));
    link.type = random.chance(0.25) ? JointType::prismatic : JointType::revolute;
    link.theta = random.uniform(-pi, pi);
    link.d = random.uniform(-500, 500);
    link.a = random.uniform(-500, 500);
    // Right and zero twists are what real arms have; both are common here, general ones as well.
    link.alpha = random.chance(0.5) ? random.integer(-1, 2) * pi / 2 : random.uniform(-pi, pi);
    link.placement = random_pose(random, 500);
    link.axis = random_direction(random);
    arm.links.push_back(link);
  }
  arm.flange = random_pose(random, 100);
  arm.tool = random_pose(random, 300);
  return arm;
}

inline Matrix3 turn(double angle, const Vector3& axis) {
  return Eigen::AngleAxisd(angle, axis).toRotationMatrix();
}

inline Joint to_joint(const Link& link) {
  const Pose about_z{turn(link.theta, Vector3::UnitZ()), Vector3(0, 0, link.d)};
  const Pose about_x{turn(link.alpha, Vector3::UnitX()), Vector3(link.a, 0, 0)};
  Joint joint;
  joint.type = link.type;
  switch (link.form) {
    case Link::Form::distal:
      joint.before = about_z;
      joint.after = about_x;
      break;
    case Link::Form::proximal:
      joint.before = about_x * about_z;
      break;
    case Link::Form::mount: {
      const Pose z_to_axis{Eigen::Quaterniond::FromTwoVectors(Vector3::UnitZ(), link.axis).toRotationMatrix(),
                           Vector3::Zero()};
      joint.before = link.placement * z_to_axis;
      joint.after = z_to_axis.inverse();
      break;
    }
  }
  return joint;
}

inline Arm to_arm(const LinkArm& links, double characteristic_length = 1000) {
  Arm arm;
  arm.base = links.base;
  for (const Link& link : links.links) arm.joints.push_back(to_joint(link));
  arm.flange = links.flange;
  arm.characteristic_length = characteristic_length;
  return arm;
}

/// Joint values of a random arm: whole turns and half metres.
inline JointVector random_joints(Random& random, const LinkArm& arm) {
  JointVector q(static_cast<Eigen::Index>(arm.links.size()));
  for (std::size_t i = 0; i < arm.links.size(); ++i) {
    const bool turns = arm.links[i].type == JointType::revolute;
    q[static_cast<Eigen::Index>(i)] = turns ? random.uniform(-2 * pi, 2 * pi) : random.uniform(-500, 500);
  }
  return q;
}

}  // namespace pathvet::test
