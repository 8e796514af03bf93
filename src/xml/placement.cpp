#include "xml/placement.hpp"

#include <fmt/format.h>

#include <array>
#include <cmath>

#include "pathvet/model/units.hpp"

namespace pathvet::xml {
namespace {

struct SineCosine {
  double sine;
  double cosine;
};

SineCosine sine_cosine(double degrees) {
  // The remainder of a division by 90 is exact, so is the quadrant: no error of a rounded pi comes in.
  int quadrant = 0;
  const double rest = std::remquo(degrees, 90.0, &quadrant) * radians_per_degree;
  const double sine = std::sin(rest);
  const double cosine = std::cos(rest);
  switch (quadrant & 3) {
    case 0:
      return {sine, cosine};
    case 1:
      return {cosine, -sine};
    case 2:
      return {-sine, -cosine};
    default:
      return {-cosine, sine};
  }
}

Matrix3 cross_matrix(const Vector3& v) {
  Matrix3 cross;
  cross << 0, -v.z(), v.y(), v.z(), 0, -v.x(), -v.y(), v.x(), 0;
  return cross;
}

constexpr std::array orientations{"quaternion", "roll-pitch-yaw", "rotation-vector"};

std::optional<Matrix3> read_quaternion(const Element& element) {
  const auto q = element.numbers("quaternion", 4);
  if (!q) return std::nullopt;
  const Eigen::Quaterniond quaternion((*q)[0], (*q)[1], (*q)[2], (*q)[3]);
  const double norm = quaternion.norm();
  if (std::abs(norm - 1) > quaternion_norm_tolerance) {
    element.fault_at("quaternion", fmt::format("quaternion of <{}> has norm {:.6g}; expected 1 within {:g}",
                                               element.name(), norm, quaternion_norm_tolerance));
    return std::nullopt;
  }
  return quaternion.normalized().toRotationMatrix();
}

std::optional<Matrix3> read_orientation(const Element& element, std::string_view spelling) {
  if (spelling == "quaternion") return read_quaternion(element);
  if (spelling == "roll-pitch-yaw") {
    const auto angles = read_vector(element, "roll-pitch-yaw");
    if (!angles) return std::nullopt;
    return rotation_from_degrees(angles->x(), angles->y(), angles->z());
  }
  const auto vector = read_vector(element, "rotation-vector");
  if (!vector) return std::nullopt;
  return rotation_from_vector_degrees(*vector);
}

}  // namespace

Matrix3 rotation_x(double degrees) {
  const auto [s, c] = sine_cosine(degrees);
  Matrix3 rotation;
  rotation << 1, 0, 0, 0, c, -s, 0, s, c;
  return rotation;
}

Matrix3 rotation_y(double degrees) {
  const auto [s, c] = sine_cosine(degrees);
  Matrix3 rotation;
  rotation << c, 0, s, 0, 1, 0, -s, 0, c;
  return rotation;
}

Matrix3 rotation_z(double degrees) {
  const auto [s, c] = sine_cosine(degrees);
  Matrix3 rotation;
  rotation << c, -s, 0, s, c, 0, 0, 0, 1;
  return rotation;
}

Matrix3 rotation_from_degrees(double roll, double pitch, double yaw) {
  return rotation_z(yaw) * rotation_y(pitch) * rotation_x(roll);
}

Matrix3 rotation_from_vector_degrees(const Vector3& vector) {
  const double degrees = vector.stableNorm();
  if (degrees == 0) return Matrix3::Identity();
  const Matrix3 cross = cross_matrix(vector / degrees);
  const double half_sine = sine_cosine(degrees / 2).sine;
  return Matrix3::Identity() + sine_cosine(degrees).sine * cross + 2 * half_sine * half_sine * cross * cross;
}

Matrix3 rotation_from_z_to(const Vector3& axis) {
  if (axis.z() < 0) return rotation_from_z_to(-axis) * rotation_x(180);
  const Matrix3 cross = cross_matrix(Vector3::UnitZ().cross(axis));
  return Matrix3::Identity() + cross + cross * cross / (1 + axis.z());
}

void expect_placement(const Element& element, Element::NameList further) {
  std::vector<std::string_view> names{"position"};
  for (const std::string_view name : orientations) names.push_back(name);
  for (const std::string_view name : further) names.push_back(name);
  element.expect(names, {});
}

std::optional<Vector3> read_vector(const Element& element, const char* attribute) {
  const auto numbers = element.numbers(attribute, 3);
  if (!numbers) return std::nullopt;
  return Vector3((*numbers)[0], (*numbers)[1], (*numbers)[2]);
}

std::optional<Pose> read_placement(const Element& element) {
  std::optional<Pose> pose = Pose{};
  if (element.has("position")) {
    const auto position = read_vector(element, "position");
    if (!position) pose.reset();
    if (position) pose->position = *position;
  }
  const char* first = nullptr;
  for (const char* spelling : orientations) {
    if (!element.has(spelling)) continue;
    const auto rotation = read_orientation(element, spelling);
    if (first != nullptr) {
      element.fault_at(spelling, fmt::format("{} of <{}> besides {}; expected one orientation at most",
                                             spelling, element.name(), first));
    }
    first = spelling;
    if (!rotation) pose.reset();
    if (pose) pose->rotation = *rotation;
  }
  return pose;
}

}  // namespace pathvet::xml
