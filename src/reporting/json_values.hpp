#pragma once

#include <nlohmann/json.hpp>
#include <optional>
#include <string>
#include <vector>

#include "pathvet/checks/result.hpp"

/// Values as JSON, in the units of reports.
namespace pathvet::reporting {

using Json = nlohmann::ordered_json;

/// The number; without a fraction as an integer; null if it isn't finite.
[[nodiscard]] Json number(double value);
[[nodiscard]] Json number(const std::optional<double>& value);
[[nodiscard]] Json in_unit(const std::optional<double>& value, Quantity quantity);
/// The text, or null where it is empty.
[[nodiscard]] Json text_or_null(const std::string& text);

/// One value per joint; `types` says which is an angle.
[[nodiscard]] Json joint_values(const JointVector& values, const std::vector<JointType>& types);
[[nodiscard]] std::vector<JointType> joint_types(const PathResult& path);

[[nodiscard]] Json position(const Pose& pose);    ///< x y z, mm
[[nodiscard]] Json quaternion(const Pose& pose);  ///< w x y z

/// Pretty text with a line break at its end; bytes that are no UTF-8 (a file name may have some) are
/// replaced.
[[nodiscard]] std::string text(const Json& value);

}  // namespace pathvet::reporting
