#include "kinematics/screw_axes.hpp"

namespace pathvet::detail {

Pose turn_about(const AxisLine& line, double angle) {
  Pose out;
  for (int i = 0; i < 3; ++i) out.rotation.col(i) = turned(Vector3::Unit(i), line.direction, angle);
  out.position = line.point - out.rotation * line.point;
  return out;
}

double angle_about(const Vector3& axis, const Vector3& from, const Vector3& to) {
  const Vector3 side = axis.cross(from);
  const double sine = side.dot(to);
  const double cosine = side.dot(axis.cross(to));
  return std::atan2(sine, cosine);
}

CommonNormal common_normal(const AxisLine& first, const AxisLine& second) {
  CommonNormal out;
  const Vector3 across = first.direction.cross(second.direction);
  const Vector3 between = second.point - first.point;
  out.sine = across.norm();
  if (out.sine <= geometry_tolerance) {
    out.foot_first = first.point;
    out.foot_second = second.point - second.direction.dot(between) * second.direction;
  } else {
    const double square = out.sine * out.sine;
    out.foot_first = first.point + between.cross(second.direction).dot(across) / square * first.direction;
    out.foot_second = second.point + between.cross(first.direction).dot(across) / square * second.direction;
  }
  out.distance = (out.foot_second - out.foot_first).norm();
  return out;
}

ScrewAxes::ScrewAxes(const Chain& chain) : count(chain.joint_count()), length(chain.characteristic_length()) {
  ChainState<Eigen::Dynamic> state;
  chain.evaluate<Eigen::Dynamic>(JointVector::Zero(count), state);
  home = state.tcp;
  for (int i = 0; i < count; ++i) {
    lines[static_cast<std::size_t>(i)] = {home.position - state.levers.col(i), state.axes.col(i)};
  }
}

bool ScrewAxes::parallel(int i, int j) const {
  return (*this)[i].direction.cross((*this)[j].direction).norm() <= geometry_tolerance;
}

bool ScrewAxes::meet(int i, int j) const {
  const CommonNormal normal = common_normal((*this)[i], (*this)[j]);
  return normal.sine > geometry_tolerance && normal.distance <= geometry_tolerance * length;
}

ScrewAxes ScrewAxes::reversed() const {
  ScrewAxes out = *this;
  const Pose back = home.inverse();
  for (int i = 0; i < count; ++i) {
    AxisLine line = (*this)[count - 1 - i].moved(back);
    line.direction = -line.direction;
    out.lines[static_cast<std::size_t>(i)] = line;
  }
  out.home = back;
  return out;
}

}  // namespace pathvet::detail
