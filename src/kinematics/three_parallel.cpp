#include "kinematics/circle_equations.hpp"
#include "kinematics/special_six.hpp"
#include "pathvet/model/units.hpp"

namespace pathvet::detail {

namespace {

constexpr double slack = 1e-8;  ///< as in three_joints.cpp
constexpr double no_lever = 1e-11;

Vector3 without(const Vector3& vector, const Vector3& axis) {
  return vector - axis.dot(vector) * axis;
}

}  // namespace

std::optional<ThreeParallel> ThreeParallel::detect(const ScrewAxes& axes) {
  const bool singular = axes.parallel(3, 4) || axes.parallel(0, 1) ||
                        common_normal(axes[1], axes[2]).distance <= geometry_tolerance * axes.length ||
                        common_normal(axes[2], axes[3]).distance <= geometry_tolerance * axes.length;
  if (!axes.parallel(1, 2) || !axes.parallel(2, 3) || singular) return std::nullopt;
  ThreeParallel out;
  for (int i = 0; i < 6; ++i) out.lines_[static_cast<std::size_t>(i)] = axes[i];
  out.length_ = axes.length;
  out.fifth_to_sixth_ = common_normal(axes[4], axes[5]);
  out.wrist_ = WristTurns(axes[1].direction, axes[4].direction, axes[5].direction);
  out.wrist_meets_ = out.fifth_to_sixth_.distance <= geometry_tolerance * axes.length;
  out.wrist_parallel_ = out.fifth_to_sixth_.sine <= geometry_tolerance;
  if (out.wrist_meets_ && out.wrist_parallel_) return std::nullopt;
  return out;
}

/// The part along z of `vector` turned about `axis` by sign * angle.
ThreeParallel::Linear ThreeParallel::along_axis(const Vector3& axis, const Vector3& vector,
                                                double sign) const {
  const Vector3& z = lines_[1].direction;
  const double along = z.dot(axis) * axis.dot(vector);
  return {z.dot(vector) - along, sign * z.dot(axis.cross(vector)), along};
}

bool ThreeParallel::solve(const Pose& motion, std::vector<SixAngles>& out) const {
  out.clear();
  const Vector3& z = lines_[1].direction;
  // first[i](q1) = fifth[i](q5): i = 0 the height of the foot on axis 6, i = 1 the slope of axis 6.
  std::array<Linear, 2> first{
      along_axis(lines_[0].direction, (motion * fifth_to_sixth_.foot_second - lines_[0].point) / length_,
                 -1.0),
      along_axis(lines_[0].direction, motion.rotation * lines_[5].direction, -1.0)};
  const std::array<Linear, 2> fifth{
      along_axis(lines_[4].direction, (fifth_to_sixth_.foot_second - fifth_to_sixth_.foot_first) / length_,
                 1.0),
      along_axis(lines_[4].direction, lines_[5].direction, 1.0)};
  first[0].one -= z.dot(fifth_to_sixth_.foot_first - lines_[0].point) / length_;
  const auto rest = [&](double q1) -> Matrix3 {  // to be made by joints 2 to 6
    return turn_about(lines_[0], -q1).rotation * motion.rotation;
  };
  if (wrist_meets_) {  // the height alone gives q1
    const Angles<2> firsts = solve_linear(first[0].cosine, first[0].sine, fifth[0].one - first[0].one, slack);
    bool all = true;
    for (const double q1 : firsts) {
      const Matrix3 left = rest(q1);
      for (WristTurns::Turns turns : wrist_.solve(left)) {
        const bool straight = turns.free;
        turns.free = straight || firsts.free;
        if (!straight) {
          finish(motion, q1, turns, out);
        } else if (!finish_free(motion, q1, left, turns, out)) {
          all = false;
        }
      }
    }
    return all;
  }
  if (wrist_parallel_) {  // the slope alone gives q1
    const Angles<2> firsts = solve_linear(first[1].cosine, first[1].sine, fifth[1].one - first[1].one, slack);
    for (const double q1 : firsts) {
      const Angles<2> fifths =
          solve_linear(fifth[0].cosine, fifth[0].sine, first[0].at(q1) - fifth[0].one, slack);
      for (const double q5 : fifths) {
        WristTurns::Turns turns = turns_at(rest(q1), q5);
        turns.free = turns.free || firsts.free || fifths.free;
        finish(motion, q1, turns, out);
      }
    }
    return true;
  }
  const double det = fifth[0].cosine * fifth[1].sine - fifth[0].sine * fifth[1].cosine;
  const auto solve_for = [&](double r0, double r1) {
    return std::array<double, 2>{(r0 * fifth[1].sine - r1 * fifth[0].sine) / det,
                                 (fifth[0].cosine * r1 - fifth[1].cosine * r0) / det};
  };
  const auto c = solve_for(first[0].cosine, first[1].cosine);
  const auto s = solve_for(first[0].sine, first[1].sine);
  const auto one = solve_for(first[0].one - fifth[0].one, first[1].one - fifth[1].one);
  CircleQuadratic circle;  // cos^2 q5 + sin^2 q5 = 1
  for (std::size_t i = 0; i < 2; ++i) {
    circle.cc += c[i] * c[i];
    circle.ss += s[i] * s[i];
    circle.cs += 2 * c[i] * s[i];
    circle.c += 2 * c[i] * one[i];
    circle.s += 2 * s[i] * one[i];
    circle.one += one[i] * one[i];
  }
  circle.one -= 1;
  const Angles<4> firsts = solve_quadratic(circle);
  for (const double q1 : firsts) {
    const double cosine = c[0] * std::cos(q1) + s[0] * std::sin(q1) + one[0];
    const double sine = c[1] * std::cos(q1) + s[1] * std::sin(q1) + one[1];
    finish(motion, q1, turns_at(rest(q1), std::atan2(sine, cosine)), out);
  }
  return !firsts.free;
}

/// The turns with this q5.
WristTurns::Turns ThreeParallel::turns_at(const Matrix3& rotation, double q5) const {
  const Vector3& z = lines_[1].direction;
  const Vector3& z6 = lines_[5].direction;
  const Vector3 seen = rotation.transpose() * z;
  const Vector3 kept = turned(z, lines_[4].direction, -q5);
  WristTurns::Turns out;
  out.q5 = q5;
  out.free = z6.cross(kept).norm() <= no_lever;
  out.q6 = out.free ? 0.0 : angle_about(z6, seen, kept);
  const Vector3 mark = z.unitOrthogonal();
  // rotation = Rz(q4) R5 R6, so Rz mark = rotation R6^-1 R5^-1 mark
  const Vector3 back = turned(turned(mark, lines_[4].direction, -q5), z6, -out.q6);
  out.q4 = angle_about(z, mark, rotation * back);
  return out;
}

/// A straight wrist: joints 2 to 4 may share the turn about z with joint 6 in any way that they reach.
bool ThreeParallel::finish_free(const Pose& motion, double q1, const Matrix3& rotation,
                                const WristTurns::Turns& turns, std::vector<SixAngles>& out) const {
  constexpr int places = 16;
  for (int i = 0; i < places; ++i) {
    const double sum = wrap_angle(2 * pi * i / places);
    if (finish(motion, q1, wrist_.with_first(rotation, turns, sum), out)) return true;
  }
  return false;
}

bool ThreeParallel::finish(const Pose& motion, double q1, const WristTurns::Turns& turns,
                           std::vector<SixAngles>& out) const {
  const Vector3& z = lines_[1].direction;
  const Pose planar = turn_about(lines_[0], -q1) * motion * turn_about(lines_[5], -turns.q6) *
                      turn_about(lines_[4], -turns.q5);
  const Vector3 upper = without(lines_[2].point - lines_[1].point, z) / length_;
  const Vector3 fore = without(lines_[3].point - lines_[2].point, z) / length_;
  const Vector3 goal = without(planar * lines_[3].point - lines_[1].point, z) / length_;
  const double gap = goal.squaredNorm() - upper.squaredNorm() - fore.squaredNorm();
  const Angles<2> thirds = solve_linear(2 * upper.dot(fore), 2 * upper.dot(z.cross(fore)), gap, slack);
  for (const double q3 : thirds) {
    const bool any_q2 = goal.norm() <= no_lever;
    const double q2 = any_q2 ? 0.0 : angle_about(z, upper + turned(fore, z, q3), goal);
    out.push_back({{q1, q2, q3, wrap_angle(turns.q4 - q2 - q3), turns.q5, turns.q6},
                   turns.free || any_q2 || thirds.free});
  }
  return thirds.count > 0;
}

}  // namespace pathvet::detail
