#include "point_speeds.hpp"

#include <cmath>

namespace pathvet {
namespace {

/// Walks from the base to the TCP, handing each point's velocity and acceleration to `take`.
template <int N, typename Take>
void walk(const Chain& chain, const ChainState<N>& state, const Node& node, Take take) {
  const int n = chain.joint_count();
  Vector3 spin = Vector3::Zero();
  Vector3 spin_rate = Vector3::Zero();
  Vector3 velocity = Vector3::Zero();
  Vector3 acceleration = Vector3::Zero();
  for (int i = 0; i < n; ++i) {
    const Vector3 axis = state.axes.col(i);
    Vector3 along = Vector3::Zero();
    if (chain.is_revolute(i)) {
      spin_rate += node.rate_rate[i] * axis + node.rate[i] * spin.cross(axis);
      spin += node.rate[i] * axis;
    } else {
      along = node.rate[i] * axis;
      acceleration += node.rate_rate[i] * axis + 2 * spin.cross(along);
    }
    const Vector3 ray =
        i + 1 < n ? Vector3(state.levers.col(i) - state.levers.col(i + 1)) : Vector3(state.levers.col(i));
    velocity += along + spin.cross(ray);
    acceleration += spin_rate.cross(ray) + spin.cross(spin.cross(ray));
    take(i, velocity, acceleration);
  }
}

}  // namespace

std::string PointSpeeds::name(int point) const {
  if (point + 1 == count()) return "TCP";
  return "centre of " + arm_.joints[static_cast<std::size_t>(point) + 1].name;
}

std::array<PointSpeeds::Speed, max_joints> PointSpeeds::at(const Node& node) const {
  std::array<Speed, max_joints> out{};
  ChainState<Eigen::Dynamic> state;
  chain_.evaluate<Eigen::Dynamic>(node.q, state);
  walk<Eigen::Dynamic>(chain_, state, node, [&](int i, const Vector3& velocity, const Vector3& acceleration) {
    Speed& speed = out[static_cast<std::size_t>(i)];
    speed.value = velocity.norm();
    speed.slope = speed.value > 0 ? velocity.dot(acceleration) / speed.value : 0.0;
  });
  return out;
}

void PointSpeeds::speeds(const Node& node, const ChainState<6>* state,
                         std::array<double, max_joints>& out) const {
  const auto take = [&](int i, const Vector3& velocity, const Vector3&) {
    out[static_cast<std::size_t>(i)] = velocity.norm();
  };
  if (state != nullptr) {
    walk<6>(chain_, *state, node, take);
    return;
  }
  ChainState<Eigen::Dynamic> own;
  chain_.evaluate<Eigen::Dynamic>(node.q, own);
  walk<Eigen::Dynamic>(chain_, own, node, take);
}

}  // namespace pathvet
