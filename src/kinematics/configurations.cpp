#include "pathvet/kinematics/configurations.hpp"

#include <optional>

#include "kinematics/locked_arm.hpp"
#include "kinematics/multi_start.hpp"
#include "kinematics/padded_arm.hpp"
#include "pathvet/model/units.hpp"

namespace pathvet {

namespace {

using detail::SolutionSet;

/// Seeds in a row without a new configuration before a search ends: on the arm with 16 solutions a search
/// needs about 100 seeds for the last one.
constexpr int search_patience = 192;
constexpr int polish_steps = 30;
/// What stands for a continuum: seeds of a search, places of a locked joint, turns about the tool's axis.
constexpr int representatives = 64;
constexpr int locked_places = 8;
constexpr int tool_turns = 8;

}  // namespace

struct ConfigurationFinder::Methods {
  /// The arm with some joints standing still.
  struct Locked {
    std::vector<int> joints;
    std::vector<double> values;
    ConfigurationFinder rest;
  };

  Arm arm;
  Chain chain;
  std::optional<detail::PaddedArm> full, axis, free;
  std::vector<Locked> locked_full, locked_axis, locked_free;

  Methods(const Arm& the_arm, const Pose& tool)
      : arm(the_arm),
        chain(the_arm, tool),
        full(detail::PaddedArm::make(arm, tool, Orientation::full)),
        axis(detail::PaddedArm::make(arm, tool, Orientation::axis)),
        free(detail::PaddedArm::make(arm, tool, Orientation::free)),
        locked_full(lock(tool, Orientation::full)),
        locked_axis(lock(tool, Orientation::axis)),
        locked_free(lock(tool, Orientation::free)) {}

  [[nodiscard]] std::vector<Locked> lock(const Pose& tool, Orientation orientation) const {
    const std::vector<int> joints = detail::joints_to_lock(arm, tool, orientation);
    std::vector<Locked> out;
    if (joints.empty()) return out;
    const detail::SeedBox box = detail::limit_box(arm);
    const detail::SpreadPoints points(static_cast<int>(joints.size()));
    for (int place = 0; place < locked_places; ++place) {
      const JointVector share = points.point(place);
      std::vector<double> values;
      for (std::size_t k = 0; k < joints.size(); ++k) {
        const int i = joints[k];
        values.push_back(box.lower[i] + share[static_cast<Eigen::Index>(k)] * (box.upper[i] - box.lower[i]));
      }
      out.push_back({joints, values, ConfigurationFinder(detail::locked_arm(arm, joints, values), tool)});
    }
    return out;
  }

  [[nodiscard]] const std::optional<detail::PaddedArm>& exact(Orientation orientation) const {
    return orientation == Orientation::full ? full : orientation == Orientation::axis ? axis : free;
  }
  [[nodiscard]] const std::vector<Locked>& locked(Orientation orientation) const {
    return orientation == Orientation::full   ? locked_full
           : orientation == Orientation::axis ? locked_axis
                                              : locked_free;
  }

  /// True if every isolated configuration was found.
  bool find(const Pose& tcp, Orientation orientation, SolutionSet& solutions) const {
    if (arm.joint_count() > detail::bound_rows(orientation) || !locked(orientation).empty()) {
      represent(tcp, orientation, solutions);
      return false;
    }
    if (const auto& method = exact(orientation)) {
      if (method->solve(tcp, solutions)) return true;
      if (method->closed_form() && solutions.size() > 0) return false;  // singular: a continuum, represented
    }
    detail::search_from_seeds(detail::whole_box(arm), search_patience, representatives, solutions);
    return false;
  }

  void represent(const Pose& tcp, Orientation orientation, SolutionSet& solutions) const {
    if (orientation == Orientation::axis && full && arm.joint_count() == 6) {
      for (int i = 0; i < tool_turns; ++i) {
        const Matrix3 turn = rotation_from_vector(Vector3(0, 0, 2 * pi * i / tool_turns));
        (void)full->solve({tcp.rotation * turn, tcp.position}, solutions);
      }
      return;
    }
    for (const Locked& sample : locked(orientation)) {
      for (const JointVector& rest : sample.rest.find(tcp, orientation).joints)
        offer_unlocked(sample, rest, solutions);
    }
    if (solutions.size() == 0) {
      detail::search_from_seeds(detail::limit_box(arm), representatives, representatives, solutions);
    }
  }

  void offer_unlocked(const Locked& sample, const JointVector& rest, SolutionSet& solutions) const {
    JointVector q(arm.joint_count());
    std::size_t held = 0;
    Eigen::Index moving = 0;
    for (int i = 0; i < arm.joint_count(); ++i) {
      const bool is_held = held < sample.joints.size() && sample.joints[held] == i;
      q[i] = is_held ? sample.values[held++] : rest[moving++];
    }
    solutions.offer(q, polish_steps);
  }
};

ConfigurationFinder::ConfigurationFinder(const Arm& arm, const Pose& tool)
    : methods_(std::make_shared<const Methods>(arm, tool)) {}

Configurations ConfigurationFinder::find(const Pose& tcp, Orientation orientation) const {
  SolutionSet solutions(methods_->chain, orientation, tcp);
  Configurations out;
  out.complete = methods_->find(tcp, orientation, solutions);
  out.joints = solutions.sorted();
  return out;
}

}  // namespace pathvet
