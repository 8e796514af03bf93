#include "xml/segment_faults.hpp"

#include <algorithm>
#include <cmath>

namespace pathvet::xml {

std::optional<std::string> arc_problem(const Vector3& start, const Vector3& via, const Vector3& end) {
  const Vector3 first = via - start;
  const Vector3 second = end - via;
  const Vector3 chord = end - start;
  if (first.norm() < coincident_distance)
    return "via is where the arc starts; expected a point between start and end";
  if (second.norm() < coincident_distance)
    return "via is where the arc ends; expected a point between start and end";
  if (chord.norm() < coincident_distance)
    return "the arc ends where it starts; expected two arcs for a full circle";
  const double sine = std::max({first.cross(second).norm() / (first.norm() * second.norm()),
                                first.cross(chord).norm() / (first.norm() * chord.norm()),
                                second.cross(chord).norm() / (second.norm() * chord.norm())});
  if (sine < collinear_sine)
    return "start, via and end of the arc are on a line; expected a linear move, or another via";
  return std::nullopt;
}

bool is_half_turn(const Matrix3& from, const Matrix3& to) {
  // The quaternion's scalar part is the cosine of half the angle: it keeps all its digits near 180°.
  return 2 * std::asin(std::min(1.0, quaternion(from.transpose() * to).w())) < half_turn_tolerance;
}

}  // namespace pathvet::xml
