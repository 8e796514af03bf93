#include "kinematics/three_joints.hpp"

#include "kinematics/circle_equations.hpp"

namespace pathvet::detail {

namespace {

/// An equation in squared characteristic lengths may be missed by this: it lets the border of the reach in,
/// and what it lets in too much is refused by the check of the whole pose.
constexpr double slack = 1e-8;
/// A lever shorter than this share of the characteristic length leaves its joint free.
constexpr double no_lever = 1e-11;

Vector3 without(const Vector3& vector, const Vector3& axis) {
  return vector - axis.dot(vector) * axis;
}

}  // namespace

ThreeJointPosition::ThreeJointPosition(const ScrewAxes& axes, const Vector3& point)
    : lines_{axes[0], axes[1], axes[2]}, point_(point), length_(axes.length) {
  shoulder_ = common_normal(lines_[0], lines_[1]);
  const Vector3 z2 = lines_[1].direction;
  const Vector3 z3 = lines_[2].direction;
  const bool shoulder_parallel = shoulder_.sine <= geometry_tolerance;
  const bool shoulder_meets = shoulder_.distance <= geometry_tolerance * length_;
  const bool elbow_parallel = axes.parallel(1, 2);
  const bool elbow_coaxial =
      elbow_parallel && common_normal(lines_[1], lines_[2]).distance <= geometry_tolerance * length_;
  if ((shoulder_parallel && (shoulder_meets || elbow_parallel)) || elbow_coaxial) return;
  shape_ = elbow_parallel      ? Shape::elbow_parallel
           : shoulder_meets    ? Shape::shoulder_meets
           : shoulder_parallel ? Shape::shoulder_parallel
                               : Shape::general;
  const Vector3 lever = point_ - lines_[2].point;
  across_ = without(lever, z3);
  aside_ = z3.cross(across_);
  centre_ = point_ - across_;
  x_ = shoulder_meets ? lines_[0].direction.cross(z2).normalized()
                      : without(shoulder_.foot_second - shoulder_.foot_first, z2).normalized();
  y_ = z2.cross(x_);
}

bool ThreeJointPosition::solve(const Vector3& target, std::vector<ThreeAngles>& out) const {
  out.clear();
  switch (shape_) {
    case Shape::singular:
      return false;
    case Shape::elbow_parallel:
      return solve_elbow_parallel(target, out);
    default:
      return solve_third_first(target, out);
  }
}

/// Joints 2 and 3 keep the height along their axes: that gives q1. What remains is the planar arm of two
/// links.
bool ThreeJointPosition::solve_elbow_parallel(const Vector3& target, std::vector<ThreeAngles>& out) const {
  const Vector3& z1 = lines_[0].direction;
  const Vector3& z = lines_[1].direction;
  const Vector3 reach = (target - lines_[0].point) / length_;
  const double along = z1.dot(z) * z1.dot(reach);
  const Angles<2> firsts = solve_linear(z.dot(reach) - along, -z.dot(z1.cross(reach)),
                                        z.dot(point_ - lines_[0].point) / length_ - along, slack);
  const Vector3 upper = without(lines_[2].point - lines_[1].point, z) / length_;
  const Vector3 fore = without(point_ - lines_[2].point, z) / length_;
  for (const double q1 : firsts) {
    const Vector3 goal = without(turned_about(target, lines_[0], -q1) - lines_[1].point, z) / length_;
    const double rest = goal.squaredNorm() - upper.squaredNorm() - fore.squaredNorm();
    const Angles<2> thirds = solve_linear(2 * upper.dot(fore), 2 * upper.dot(z.cross(fore)), rest, slack);
    for (const double q3 : thirds) {
      const bool any_q2 = goal.norm() <= no_lever;
      const double q2 = any_q2 ? 0.0 : angle_about(z, upper + turned(fore, z, q3), goal);
      out.push_back({{q1, q2, q3}, firsts.free || thirds.free || any_q2});
    }
  }
  return true;
}

/// The equations that are left for q3 (lengths over the characteristic length). With v the point, turned by
/// q3, seen from axis 2's foot and a the distance of axes 1 and 2:
///   far    = |target|^2 - a^2 - |v|^2          = 2 a (cos q2 v_x - sin q2 v_y)
///   higher = z1.target - (z1.z2) (z2.v)        = (z1.y) (sin q2 v_x + cos q2 v_y)
bool ThreeJointPosition::solve_third_first(const Vector3& target, std::vector<ThreeAngles>& out) const {
  const Vector3& z1 = lines_[0].direction;
  const Vector3& z2 = lines_[1].direction;
  const Vector3 reach = (target - shoulder_.foot_first) / length_;
  const Vector3 centre = (centre_ - shoulder_.foot_second) / length_;
  const Vector3 across = across_ / length_;
  const Vector3 aside = aside_ / length_;
  const double a = shoulder_.distance / length_;
  const double tilt = z1.dot(z2);
  const double far_c = -2 * centre.dot(across);
  const double far_s = -2 * centre.dot(aside);
  const double far_1 = reach.squaredNorm() - a * a - centre.squaredNorm() - across.squaredNorm();
  const double high_c = -tilt * z2.dot(across);
  const double high_s = -tilt * z2.dot(aside);
  const double high_1 = z1.dot(reach) - tilt * z2.dot(centre);
  if (shape_ != Shape::general) {
    const Angles<2> thirds = shape_ == Shape::shoulder_meets ? solve_linear(far_c, far_s, -far_1, slack)
                                                             : solve_linear(high_c, high_s, -high_1, slack);
    for (const double q3 : thirds) finish(target, q3, out);
    return !thirds.free;
  }
  const double lift = z1.dot(y_);
  // lift^2 far^2 + 4 a^2 higher^2 = 4 a^2 lift^2 (|v|^2 - (z2.v)^2)
  const double f = lift * lift;
  const double h = 4 * a * a;
  const double v_c = z2.dot(across);
  const double v_s = z2.dot(aside);
  const double v_1 = z2.dot(centre);
  CircleQuadratic q;
  q.cc = f * far_c * far_c + h * high_c * high_c + h * f * v_c * v_c;
  q.ss = f * far_s * far_s + h * high_s * high_s + h * f * v_s * v_s;
  q.cs = 2 * (f * far_c * far_s + h * high_c * high_s + h * f * v_c * v_s);
  q.c = 2 * (f * far_c * far_1 + h * high_c * high_1 + h * f * (v_c * v_1 - centre.dot(across)));
  q.s = 2 * (f * far_s * far_1 + h * high_s * high_1 + h * f * (v_s * v_1 - centre.dot(aside)));
  q.one = f * far_1 * far_1 + h * high_1 * high_1 +
          h * f * (v_1 * v_1 - centre.squaredNorm() - across.squaredNorm());
  const Angles<4> thirds = solve_quadratic(q);
  for (const double q3 : thirds) finish(target, q3, out);
  return !thirds.free;
}

void ThreeJointPosition::finish(const Vector3& target, double q3, std::vector<ThreeAngles>& out) const {
  const Vector3& z1 = lines_[0].direction;
  const Vector3& z2 = lines_[1].direction;
  const Vector3 reach = (target - shoulder_.foot_first) / length_;
  const Vector3 v = (turned_about(point_, lines_[2], q3) - shoulder_.foot_second) / length_;
  const double v_x = x_.dot(v);
  const double v_y = y_.dot(v);
  const double a = shoulder_.distance / length_;
  const double far = reach.squaredNorm() - a * a - v.squaredNorm();
  const double higher = z1.dot(reach) - z1.dot(z2) * z2.dot(v);
  const double lift = z1.dot(y_);
  const bool any_q2 = std::hypot(v_x, v_y) <= no_lever;
  Angles<2> seconds;
  if (any_q2) {
    seconds.add(0);
  } else if (shape_ == Shape::shoulder_meets) {
    seconds = solve_linear(lift * v_y, lift * v_x, higher, slack);
  } else if (shape_ == Shape::shoulder_parallel) {
    seconds = solve_linear(2 * a * v_x, -2 * a * v_y, far, slack);
  } else {
    const double cosine = far / (2 * a);
    const double sine = higher / lift;
    seconds.add(std::atan2(sine * v_x - cosine * v_y, cosine * v_x + sine * v_y));
  }
  for (const double q2 : seconds) {
    const Vector3 now =
        (turned_about(turned_about(point_, lines_[2], q3), lines_[1], q2) - shoulder_.foot_first);
    const bool any_q1 = z1.cross(reach).norm() <= no_lever;
    const double q1 = any_q1 ? 0.0 : angle_about(z1, now / length_, reach);
    out.push_back({{q1, q2, q3}, any_q2 || any_q1 || seconds.free});
  }
}

}  // namespace pathvet::detail
