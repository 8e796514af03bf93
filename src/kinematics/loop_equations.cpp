#include "kinematics/loop_equations.hpp"

#include "kinematics/circle_equations.hpp"
#include "pathvet/model/units.hpp"

namespace pathvet::detail {

namespace {

using Invariants = Eigen::Matrix<double, 14, 1>;
using Samples = std::array<Invariants, 9>;

/// Half tangents of q4 and q5 count from these angles, which mean nothing: special poses like round angles,
/// and an infinite tangent is as unlikely here as anywhere.
constexpr double origin_4 = 0.7;
constexpr double origin_5 = -1.1;

/// A function linear in (1, cos, sin) is known from three samples.
constexpr std::array<double, 3> sample_angles{0, 2 * pi / 3, -2 * pi / 3};
constexpr double half_root_3 = 0.86602540378443864676;
/// Row k: the shares of the samples in the coefficient of 1, cos, sin.
constexpr std::array<std::array<double, 3>, 3> from_samples{{{1.0 / 3, 1.0 / 3, 1.0 / 3},
                                                             {2.0 / 3, -1.0 / 3, -1.0 / 3},
                                                             {0, 2 * half_root_3 / 3, -2 * half_root_3 / 3}}};

Invariants invariants(const Vector3& p, const Vector3& l) {
  const double pp = p.squaredNorm();
  const double pl = p.dot(l);
  Invariants out;
  out << p, l, pp, pl, p.cross(l), pp * l - 2 * pl * p;
  return out;
}

template <class Value>
Value combined(const std::array<double, 3>& shares, const Value& a, const Value& b, const Value& c) {
  return shares[0] * a + shares[1] * b + shares[2] * c;
}

/// Samples [3 a + b] of two angles to coefficients, column 3 j + k for part j of the first and k of the
/// second.
Eigen::Matrix<double, 14, 9> coefficients(const Samples& samples) {
  Samples half;
  for (std::size_t a = 0; a < 3; ++a) {
    for (std::size_t k = 0; k < 3; ++k) {
      half[3 * a + k] = combined(from_samples[k], samples[3 * a], samples[3 * a + 1], samples[3 * a + 2]);
    }
  }
  Eigen::Matrix<double, 14, 9> out;
  for (std::size_t j = 0; j < 3; ++j) {
    for (std::size_t k = 0; k < 3; ++k) {
      out.col(static_cast<int>(3 * j + k)) = combined(from_samples[j], half[k], half[3 + k], half[6 + k]);
    }
  }
  return out;
}

/// Rows 1, cos q, sin q in (1, x, x^2) over 1 + x^2, x the half tangent of q - origin.
Matrix3 half_tangents(double origin) {
  const double c = std::cos(origin);
  const double s = std::sin(origin);
  Matrix3 out;
  out << 1, 0, 1, c, -2 * s, -c, s, 2 * c, -s;
  return out;
}

}  // namespace

LoopEquations::LoopEquations(const SixLines& lines, const Pose& motion, double length)
    : lines_(lines), motion_(motion), length_(length) {
  const Vector3 origin = common_normal(lines[1], lines[2]).foot_first;
  build_left(origin);
  const Block right = build_right(origin);
  left_[0].col(0) -= right.col(0);
  right_.compute(right.rightCols<8>());
  static const Eigen::Matrix<double, 9, 9> to_tangents = [] {
    Eigen::Matrix<double, 9, 9> out;
    for (int i = 0; i < 3; ++i) {
      for (int j = 0; j < 3; ++j) {
        out.block<3, 3>(3 * i, 3 * j) = half_tangents(origin_4)(i, j) * half_tangents(origin_5);
      }
    }
    return out;
  }();
  for (std::size_t k = 0; k < 3; ++k) {
    const Block rotated = right_.householderQ().adjoint() * left_[k];
    six_[k] = rotated.bottomRows<6>() * to_tangents;
  }
}

void LoopEquations::build_left(const Vector3& origin) {
  std::array<Block, 3> at_third;
  for (std::size_t a = 0; a < 3; ++a) {
    Samples samples;
    for (std::size_t c = 0; c < 3; ++c) {
      const Vector3 p5 = turned_about(lines_[5].point, lines_[4], sample_angles[c]);
      const Vector3 l5 = turned(lines_[5].direction, lines_[4].direction, sample_angles[c]);
      for (std::size_t b = 0; b < 3; ++b) {
        const Vector3 p4 = turned_about(p5, lines_[3], sample_angles[b]);
        const Vector3 l4 = turned(l5, lines_[3].direction, sample_angles[b]);
        samples[3 * b + c] = invariants((turned_about(p4, lines_[2], sample_angles[a]) - origin) / length_,
                                        turned(l4, lines_[2].direction, sample_angles[a]));
      }
    }
    at_third[a] = coefficients(samples);
  }
  for (std::size_t k = 0; k < 3; ++k) {
    left_[k] = from_samples[k][0] * at_third[0] + from_samples[k][1] * at_third[1] +
               from_samples[k][2] * at_third[2];
  }
}

LoopEquations::Block LoopEquations::build_right(const Vector3& origin) const {
  const Vector3 place = motion_ * lines_[5].point;
  const Vector3 direction = motion_.rotation * lines_[5].direction;
  Samples samples;
  for (std::size_t a = 0; a < 3; ++a) {
    const Vector3 p1 = turned_about(place, lines_[0], -sample_angles[a]);
    const Vector3 l1 = turned(direction, lines_[0].direction, -sample_angles[a]);
    for (std::size_t b = 0; b < 3; ++b) {
      samples[3 * a + b] = invariants((turned_about(p1, lines_[1], -sample_angles[b]) - origin) / length_,
                                      turned(l1, lines_[1].direction, -sample_angles[b]));
    }
  }
  return coefficients(samples);
}

LoopEquations::Matrix12 LoopEquations::along(double constant, double cosine, double sine) const {
  const Six six = constant * six_[0] + cosine * six_[1] + sine * six_[2];
  Matrix12 out = Matrix12::Zero();
  out.block<6, 9>(0, 0) = six;
  out.block<6, 9>(6, 3) = six;
  return out;
}

std::array<double, 6> LoopEquations::angles(double q3, const Vector12& monomials) const {
  const Eigen::Map<const Eigen::Matrix<double, 3, 4>> grid(monomials.data());  // (j, i): x_5^j x_4^i
  const auto low_4 = grid.leftCols<3>();
  const auto low_5 = grid.topRows<2>();
  const double half_4 = std::atan2(low_4.cwiseProduct(grid.rightCols<3>()).sum(), low_4.squaredNorm());
  const double half_5 = std::atan2(low_5.cwiseProduct(grid.bottomRows<2>()).sum(), low_5.squaredNorm());
  const double q4 = wrap_angle(2 * half_4 + origin_4);
  const double q5 = wrap_angle(2 * half_5 + origin_5);
  const Vector3 part_4(1, std::cos(q4), std::sin(q4));
  const Vector3 part_5(1, std::cos(q5), std::sin(q5));
  Eigen::Matrix<double, 9, 1> products;
  for (int j = 0; j < 3; ++j) products.segment<3>(3 * j) = part_4[j] * part_5;
  const Invariants seen = (left_[0] + std::cos(q3) * left_[1] + std::sin(q3) * left_[2]) * products;
  const Eigen::Matrix<double, 8, 1> first = right_.solve(seen);  // columns 1 to 8: c2 s2 c1 c1c2 c1s2 s1 ...
  const double q1 = std::atan2(first[5], first[2]);
  const double q2 = std::atan2(first[1], first[0]);
  const std::array<double, 5> five{q1, q2, q3, q4, q5};
  const Vector3 mark = lines_[5].direction.unitOrthogonal();
  Vector3 turned_mark = motion_.rotation * mark;
  for (std::size_t i = 0; i < 5; ++i) turned_mark = turned(turned_mark, lines_[i].direction, -five[i]);
  return {q1, q2, q3, q4, q5, angle_about(lines_[5].direction, mark, turned_mark)};
}

double LoopEquations::miss(const std::array<double, 6>& angles) const {
  Pose all;
  for (std::size_t i = 0; i < 6; ++i) all = all * turn_about(lines_[i], angles[i]);
  // Seen at axis 6, so that a place far from the world's origin doesn't count rotation twice.
  const Vector3& point = lines_[5].point;
  return (all * point - motion_ * point).norm() / length_ + (all.rotation - motion_.rotation).norm();
}

}  // namespace pathvet::detail
