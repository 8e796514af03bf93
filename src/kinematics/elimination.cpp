#include "kinematics/elimination.hpp"

#include <Eigen/Eigenvalues>
#include <Eigen/LU>
#include <algorithm>
#include <optional>

#include "kinematics/circle_equations.hpp"
#include "kinematics/multi_start.hpp"
#include "pathvet/model/units.hpp"

namespace pathvet::detail {

namespace {

using Matrix12 = LoopEquations::Matrix12;
using Vector12 = LoopEquations::Vector12;

/// The leading matrix of a usable problem; an arm whose geometry defeats a role has 1e-17 here, others above
/// 1e-6.
constexpr double least_condition = 1e-11;
/// Imaginary part of q3 (rad) up to which a root is tried: rounding splits a double root by about 1e-6 ...
constexpr double nearly_real = 1e-3;
/// ... and moving the pose by `shift_size` by about its root.
constexpr double nearly_real_shifted = 0.1;
/// Up to this a root counts as real: its angles must close the loop, to `closes`, or the attempt isn't sound.
constexpr double real = 1e-5;
constexpr double closes = 1e-3;
constexpr int trial_poses = 4;
/// Where solutions share the value of every joint that could play the part (round poses), a pose this far off
/// tells them apart, and is near enough to polish its solutions to those of the pose.
constexpr double shift_size = 1e-4;
constexpr int shifts = 2;

/// q3 = origin + 2 atan x: the equations times 1 + x^2 are constant + linear x + leading x^2.
struct Pencil {
  double origin = 0;
  double condition = -1;
  Eigen::PartialPivLU<Matrix12> leading;
};

/// The origin that conditions the leading matrix (the equations opposite to it) best.
Pencil best_pencil(const LoopEquations& equations) {
  constexpr int origins = 4;
  Pencil best;
  for (int i = 0; i < origins; ++i) {
    const double angle = 0.3 + 2 * pi * i / origins;
    Eigen::PartialPivLU<Matrix12> leading(equations.at(angle + pi));
    const double condition = leading.rcond();
    if (condition > best.condition) best = {angle, condition, leading};
  }
  return best;
}

Eigen::Matrix<std::complex<double>, 24, 1> roots(const LoopEquations& equations, const Pencil& pencil) {
  const double c = std::cos(pencil.origin);
  const double s = std::sin(pencil.origin);
  Eigen::Matrix<double, 24, 24> companion = Eigen::Matrix<double, 24, 24>::Zero();
  companion.topRightCorner<12, 12>().setIdentity();
  companion.bottomLeftCorner<12, 12>() = -pencil.leading.solve(equations.at(pencil.origin));
  companion.bottomRightCorner<12, 12>() = -2 * pencil.leading.solve(equations.along(0, -s, c));
  return Eigen::EigenSolver<Eigen::Matrix<double, 24, 24>>(companion, false).eigenvalues();
}

/// The vector that a (nearly) singular matrix annuls: two steps of inverse iteration from a vector of no
/// meaning.
Vector12 null_vector(const Matrix12& matrix) {
  const Eigen::PartialPivLU<Matrix12> factor(matrix);
  Vector12 v;
  v << 1, -.7, .4, .9, -.3, .8, .6, -.5, 1.1, -.9, .2, .75;
  for (int i = 0; i < 2; ++i) v = factor.solve(v).eval().normalized();
  return v;
}

}  // namespace

Elimination::Elimination(const ScrewAxes& axes) : home_(axes.home), length_(axes.length) {
  const ScrewAxes backwards = axes.reversed();
  for (int i = 0; i < 6; ++i) {
    forward_[static_cast<std::size_t>(i)] = axes[i];
    backward_[static_cast<std::size_t>(i)] = backwards[i];
  }
  rank_roles(axes);
}

void Elimination::rank_roles(const ScrewAxes& axes) {
  const SpreadPoints points(6);
  for (const bool reversed : {false, true}) {
    for (int first = 0; first < 6; ++first) roles_.push_back({reversed, first, 0});
  }
  for (int trial = 1; trial <= trial_poses; ++trial) {
    const JointVector q = 2 * pi * points.point(trial);
    Pose motion;
    for (int i = 0; i < 6; ++i) motion = motion * turn_about(axes[i], q[i]);
    for (Role& role : roles_) {
      std::vector<SixAngles> ignored;
      if (attempt(role, motion, nearly_real, ignored)) ++role.sound;
    }
  }
  std::stable_sort(roles_.begin(), roles_.end(),
                   [](const Role& a, const Role& b) { return a.sound > b.sound; });
  if (roles_.front().sound > 0) std::erase_if(roles_, [](const Role& role) { return role.sound == 0; });
}

bool Elimination::solve(const Pose& motion, std::vector<SixAngles>& out) const {
  out.clear();
  if (attempt_any(motion, nearly_real, out)) return true;
  for (int i = 0; i < shifts; ++i) {
    if (attempt_any(shifted(motion, i), nearly_real_shifted, out)) return true;
  }
  return false;
}

bool Elimination::attempt_any(const Pose& motion, double most_imaginary, std::vector<SixAngles>& out) const {
  return std::any_of(roles_.begin(), roles_.end(),
                     [&](const Role& role) { return attempt(role, motion, most_imaginary, out); });
}

/// The motion moved a little, at home's TCP, in a direction of no meaning.
Pose Elimination::shifted(const Pose& motion, int index) const {
  const double sign = index % 2 == 0 ? 1 : -1;
  const Vector3 turn = sign * shift_size * Vector3(0.51, -0.83, 0.67 + 0.3 * index);
  const Vector3 move = sign * shift_size * length_ * Vector3(0.43 - 0.2 * index, 0.59, -0.37);
  Pose moved = motion * home_;
  moved.rotation = moved.rotation * rotation_from_vector(turn);
  moved.position += move;
  return moved * home_.inverse();
}

bool Elimination::attempt(const Role& role, const Pose& motion, double most_imaginary,
                          std::vector<SixAngles>& out) const {
  // Reversed, the target is the base's pose in the tool. Rolled, the loop starts at another joint, and the
  // axes before it follow at the end, moved by the inverse motion; the motion round the loop stays the same.
  const Pose around = role.reversed ? home_.inverse() * motion.inverse() * home_ : motion;
  const SixLines& given = role.reversed ? backward_ : forward_;
  const Pose back = around.inverse();
  SixLines lines;
  for (std::size_t i = 0; i < 6; ++i) {
    const std::size_t from = i + static_cast<std::size_t>(role.first);
    lines[i] = from < 6 ? given[from] : given[from - 6].moved(back);
  }
  const LoopEquations equations(lines, around, length_);
  const Pencil pencil = best_pencil(equations);
  if (!(pencil.condition > least_condition)) return false;
  bool sound = true;
  for (const std::complex<double>& x : roots(equations, pencil)) {
    const double imaginary = 2 * std::abs(x.imag()) / (1 + x.real() * x.real());
    if (!(imaginary <= most_imaginary)) continue;
    const double q3 = wrap_angle(2 * std::atan(x.real()) + pencil.origin);
    const std::array<double, 6> angles = equations.angles(q3, null_vector(equations.at(q3)));
    const double miss = equations.miss(angles);
    if (imaginary <= real && !(miss <= closes)) sound = false;
    if (!std::isfinite(miss)) continue;
    SixAngles candidate;
    for (std::size_t i = 0; i < 6; ++i) {
      const std::size_t joint = (i + static_cast<std::size_t>(role.first)) % 6;
      candidate.q[role.reversed ? 5 - joint : joint] = angles[i];
    }
    out.push_back(candidate);
  }
  return sound;
}

}  // namespace pathvet::detail
