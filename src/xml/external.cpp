#include "xml/external.hpp"

#include <fmt/format.h>

#include <cmath>

#include "xml/joints.hpp"
#include "xml/names.hpp"

namespace pathvet::xml {
namespace {

/// A limit is exceeded by more than this share of its size, not merely touched (contract, section 2).
constexpr double limit_tolerance = 1e-9;

/// The first joint whose limits a value breaks; nothing if all keep them.
const Joint* first_beyond(const std::vector<Joint>& joints, const JointVector& values) {
  for (std::size_t i = 0; i < joints.size(); ++i) {
    const Joint& joint = joints[i];
    const double value = values[static_cast<Eigen::Index>(i)];
    if (joint.continuous) continue;
    if (value < joint.lower - limit_tolerance * std::abs(joint.lower)) return &joint;
    if (value > joint.upper + limit_tolerance * std::abs(joint.upper)) return &joint;
  }
  return nullptr;
}

std::string limits_of(const Joint& joint) {
  const double unit = unit_of(joint.type);
  return fmt::format("the limits {:.9g} to {:.9g} of its joint {}", joint.lower / unit, joint.upper / unit,
                     in_quotes(joint.name));
}

}  // namespace

External::External(const Cell* cell) : cell_(cell) {
  if (cell == nullptr) return;
  for (const Positioner& positioner : cell->positioners) {
    values_.push_back(JointVector::Zero(static_cast<Eigen::Index>(positioner.joints.size())));
  }
}

void External::read_one(const Element& element, std::vector<bool>& given) {
  element.expect({"positioner"}, {}, Element::Text::numbers);
  const auto name = element.require("positioner");
  const auto numbers = element.text_numbers();
  if (!name || !numbers || cell_ == nullptr) return;
  const auto found = index_of(cell_->positioners, *name);
  if (!found) {
    element.fault_at("positioner", fmt::format("no positioner {} in the cell; {}", in_quotes(*name),
                                               expected_name(cell_->positioners)));
    return;
  }
  const auto index = static_cast<std::size_t>(*found);
  if (given[index]) {
    element.fault_at("positioner", fmt::format("a second <external> of the positioner {}", in_quotes(*name)));
  }
  given[index] = true;
  const std::vector<Joint>& joints = cell_->positioners[index].joints;
  if (numbers->size() != joints.size()) {
    element.fault_at_text(fmt::format("<external> has {}; expected {}, one for each joint of {}",
                                      counted(numbers->size(), "number"), joints.size(), in_quotes(*name)));
    return;
  }
  values_[index] = joint_vector(*numbers, joints);
  if (const Joint* joint = first_beyond(joints, values_[index])) {
    element.fault_at_text(
        fmt::format("the positioner {} is outside {}", in_quotes(*name), limits_of(*joint)));
  }
}

void External::check_start(const Element& waypoint, const std::vector<bool>& given) const {
  for (std::size_t i = 0; i < given.size(); ++i) {
    const Positioner& positioner = cell_->positioners[i];
    if (given[i]) continue;
    if (const Joint* joint = first_beyond(positioner.joints, values_[i])) {
      waypoint.fault(fmt::format("no <external> of the positioner {} at the start, and 0 is outside {}",
                                 in_quotes(positioner.name), limits_of(*joint)));
    }
  }
}

std::vector<JointVector> External::read(const Element& waypoint, bool first) {
  std::vector<bool> given(values_.size(), false);
  for (const Element& element : waypoint.children("external")) read_one(element, given);
  if (first) check_start(waypoint, given);
  return values_;
}

}  // namespace pathvet::xml
