#include "reporting/json_values.hpp"

#include <cmath>

#include "reporting/units.hpp"

namespace pathvet::reporting {

Json number(double value) {
  constexpr double exact_integers = 9007199254740992.0;  // 2^53
  if (std::abs(value) < exact_integers && value == std::trunc(value)) return static_cast<long long>(value);
  return value;  // one that isn't finite is written as null
}

Json number(const std::optional<double>& value) {
  return value ? number(*value) : Json(nullptr);
}

Json in_unit(const std::optional<double>& value, Quantity quantity) {
  return value ? number(to_user(*value, quantity)) : Json(nullptr);
}

Json text_or_null(const std::string& text) {
  return text.empty() ? Json(nullptr) : Json(text);
}

Json joint_values(const JointVector& values, const std::vector<JointType>& types) {
  Json list = Json::array();
  for (Eigen::Index i = 0; i < values.size(); ++i) {
    list.push_back(in_unit(values[i], position_quantity(types.at(static_cast<std::size_t>(i)))));
  }
  return list;
}

std::vector<JointType> joint_types(const PathResult& path) {
  std::vector<JointType> types;
  for (int i = 0; i < path.joint_count; ++i) types.push_back(path.axes.at(static_cast<std::size_t>(i)).type);
  return types;
}

Json position(const Pose& pose) {
  return {number(pose.position.x()), number(pose.position.y()), number(pose.position.z())};
}

Json quaternion(const Pose& pose) {
  const Eigen::Quaterniond q = pathvet::quaternion(pose.rotation);
  return {number(q.w()), number(q.x()), number(q.y()), number(q.z())};
}

std::string text(const Json& value) {
  return value.dump(1, ' ', false, Json::error_handler_t::replace) + '\n';
}

}  // namespace pathvet::reporting
