#pragma once

#include <kdl/frames.hpp>
#include <kdl/jntarray.hpp>

#include "pathvet/model/arm.hpp"

namespace pathvet::test {

inline KDL::Vector to_kdl(const Vector3& v) {
  return {v.x(), v.y(), v.z()};
}

inline KDL::Frame to_kdl(const Pose& pose) {
  const Matrix3& r = pose.rotation;
  return {KDL::Rotation(r(0, 0), r(0, 1), r(0, 2), r(1, 0), r(1, 1), r(1, 2), r(2, 0), r(2, 1), r(2, 2)),
          to_kdl(pose.position)};
}

inline Pose from_kdl(const KDL::Frame& frame) {
  Pose pose;
  for (int row = 0; row < 3; ++row) {
    pose.position[row] = frame.p[row];
    for (int column = 0; column < 3; ++column) pose.rotation(row, column) = frame.M(row, column);
  }
  return pose;
}

inline KDL::JntArray to_kdl(const JointVector& q) {
  KDL::JntArray array(static_cast<unsigned>(q.size()));
  for (Eigen::Index i = 0; i < q.size(); ++i) array(static_cast<unsigned>(i)) = q[i];
  return array;
}

}  // namespace pathvet::test
