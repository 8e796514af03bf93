#pragma once

#include <array>
#include <string>

#include "pathvet/kinematics/chain.hpp"
#include "pathvet/tracking/step.hpp"

namespace pathvet {

/// Speeds of an arm's joint centres and of its TCP at a node: the elbow can be fast while the TCP crawls.
class PointSpeeds {
 public:
  explicit PointSpeeds(const Arm& arm, const Chain& chain) : arm_(arm), chain_(chain) {}

  /// Joint centres 1 to n - 1 (the first joint's centre stands still), then the TCP.
  [[nodiscard]] int count() const { return chain_.joint_count(); }
  [[nodiscard]] std::string name(int point) const;

  /// A point's speed and how fast it changes, both by the step's parameter: mm.
  struct Speed {
    double value = 0;
    double slope = 0;
  };
  [[nodiscard]] std::array<Speed, max_joints> at(const Node& node) const;
  /// The speeds alone. `state`: the chain at the node, where it is at hand; null otherwise.
  void speeds(const Node& node, const ChainState<6>* state, std::array<double, max_joints>& out) const;

 private:
  const Arm& arm_;
  const Chain& chain_;
};

}  // namespace pathvet
