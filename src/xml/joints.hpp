#pragma once

#include <string>
#include <vector>

#include "pathvet/model/arm.hpp"
#include "xml/document.hpp"

namespace pathvet::xml {

/// The `joint` children of an arm or a positioner, as many as the model can hold. Every fault is put down;
/// what is returned then is only good for reading on.
[[nodiscard]] std::vector<Joint> read_joints(const Element& chain);

/// Optional `lower`, `upper` and `speed`, in the file's units; `lower` must be below `upper`.
struct Limits {
  std::optional<double> lower;
  std::optional<double> upper;
  std::optional<double> speed;
};
[[nodiscard]] Limits read_limits(const Element& element);

/// What a number of the file is multiplied by to be rad or mm.
[[nodiscard]] double unit_of(JointType type);

/// Numbers of a joint list in the model's units. Precondition: as many as joints.
[[nodiscard]] JointVector joint_vector(const std::vector<double>& numbers, const std::vector<Joint>& joints);

}  // namespace pathvet::xml
