#pragma once

#include <optional>

#include "pathvet/model/pose.hpp"
#include "xml/document.hpp"

namespace pathvet::xml {

/// A quaternion may miss norm 1 by this much; it is then normalised (contract, section 1.2).
inline constexpr double quaternion_norm_tolerance = 1e-3;

/// Rotations from angles in degrees, exact at every multiple of 90°: what is square in a file stays square.
[[nodiscard]] Matrix3 rotation_x(double degrees);
[[nodiscard]] Matrix3 rotation_y(double degrees);
[[nodiscard]] Matrix3 rotation_z(double degrees);
/// `Rz(yaw) Ry(pitch) Rx(roll)`.
[[nodiscard]] Matrix3 rotation_from_degrees(double roll, double pitch, double yaw);
/// Rotation about `vector` by its length in degrees (Rodrigues' formula, with half angles).
[[nodiscard]] Matrix3 rotation_from_vector_degrees(const Vector3& vector);
/// The rotation that turns z into the unit vector `axis` the shortest way; about x where `axis` is -z.
[[nodiscard]] Matrix3 rotation_from_z_to(const Vector3& axis);

/// Faults for what is neither a placement's attribute nor one of `further`, and for children.
void expect_placement(const Element& element, Element::NameList further = {});

/// The placement in an element's attributes: what is left out is zero or identity. Nothing if a part is
/// faulty (then with a fault).
[[nodiscard]] std::optional<Pose> read_placement(const Element& element);

/// Three numbers; nothing if the attribute isn't there or is faulty.
[[nodiscard]] std::optional<Vector3> read_vector(const Element& element, const char* attribute);

}  // namespace pathvet::xml
