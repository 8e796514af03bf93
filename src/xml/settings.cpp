#include "xml/settings.hpp"

#include <fmt/format.h>

#include "xml/names.hpp"

namespace pathvet::xml {
namespace {

constexpr double percent = 0.01;

template <typename Part>
void read_reference(const Element& element, const char* kind, const std::vector<Part>* parts,
                    std::optional<std::string_view>& name, std::optional<int>& index) {
  const auto found = element.find(kind);
  if (!found) return;
  name = found;
  if (parts == nullptr) return;
  index = index_of(*parts, *found);
  if (index) return;
  element.fault_at(kind,
                   fmt::format("no {} {} in the cell; {}", kind, in_quotes(*found), expected_name(*parts)));
}

void read_orientation(const Element& element, Orientation& orientation) {
  const auto value = element.find("orientation");
  if (!value) return;
  if (value == "full") {
    orientation = Orientation::full;
  } else if (value == "axis") {
    orientation = Orientation::axis;
  } else if (value == "free") {
    orientation = Orientation::free;
  } else {
    element.fault_at("orientation", fmt::format("orientation {}; expected \"full\", \"axis\" or \"free\"",
                                                in_quotes(*value)));
  }
}

void read_joint_rate(const Element& element, double& joint_rate) {
  const auto rate = element.number("joint-rate", Range::positive);
  if (!rate) return;
  joint_rate = *rate * percent;
  if (*rate > 100) {
    element.fault_at("joint-rate", fmt::format("joint-rate {:g}; expected at most 100 (percent)", *rate));
  }
}

}  // namespace

Settings read_settings(const Element& element, Settings settings, const Cell* cell) {
  read_reference(element, "tool", cell != nullptr ? &cell->tools : nullptr, settings.tool_name,
                 settings.tool);
  read_reference(element, "frame", cell != nullptr ? &cell->frames : nullptr, settings.frame_name,
                 settings.frame);
  settings.has_speed = settings.has_speed || element.has("speed");
  settings.speed = element.number("speed", Range::positive).value_or(settings.speed);
  if (const auto rate = element.number("turn-rate", Range::positive)) {
    settings.turn_rate = *rate * radians_per_degree;
  }
  settings.blend = element.number("blend", Range::not_negative).value_or(settings.blend);
  read_joint_rate(element, settings.joint_rate);
  read_orientation(element, settings.orientation);
  return settings;
}

}  // namespace pathvet::xml
