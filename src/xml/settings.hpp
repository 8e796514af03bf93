#pragma once

#include <optional>
#include <string_view>

#include "pathvet/model/path.hpp"
#include "pathvet/model/units.hpp"
#include "xml/document.hpp"

namespace pathvet::xml {

/// What a path presets and a waypoint may override.
struct Settings {
  std::optional<std::string_view> tool_name;
  std::optional<std::string_view> frame_name;
  std::optional<int> tool;  ///< nothing also while the cell isn't known
  std::optional<int> frame;
  bool has_speed = false;  ///< given at all, perhaps faulty
  double speed = 0;        ///< mm/s
  double turn_rate = 90 * radians_per_degree;
  double blend = 0;
  double joint_rate = 1;  ///< share
  Orientation orientation = Orientation::full;
};

/// `settings`, overridden by the element's attributes. Without a cell, the names of tool and frame stay
/// unchecked.
[[nodiscard]] Settings read_settings(const Element& element, Settings settings, const Cell* cell);

}  // namespace pathvet::xml
