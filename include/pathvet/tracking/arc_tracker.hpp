#pragma once

#include <functional>
#include <optional>

#include "pathvet/tracking/step.hpp"
#include "pathvet/tracking/task.hpp"

namespace pathvet {

/// Follows the solution curve near singularities by its arc length in (joints, fraction) instead of the
/// fraction: the curve is smooth in arc length where it swings fast (a near miss) and where it turns back (a
/// fold). Keller's pseudo-arc-length continuation; every step carries a continuity proof. For arms with at
/// most as many joints as bound directions.
class ArcTracker {
 public:
  using Dynamic = Task<Eigen::Dynamic>;
  static constexpr int most_unknowns = 7;
  using Unknowns = Eigen::Matrix<double, Eigen::Dynamic, 1, 0, most_unknowns, 1>;
  using Rows = Eigen::Matrix<double, Eigen::Dynamic, 1, 0, most_unknowns, 1>;
  using Matrix = Eigen::Matrix<double, Eigen::Dynamic, Eigen::Dynamic, 0, most_unknowns, most_unknowns>;

  /// One place of the curve. y holds the scaled joints, then the fraction over `unit_`.
  struct Place {
    TaskState<Eigen::Dynamic> task;
    Unknowns y;
    Unknowns tangent;       ///< unit
    Unknowns curvature;     ///< d tangent / d arc length
    Matrix matrix;          ///< of the linearised task: scaled Jacobian, then minus the target's rate
    Matrix left, right;     ///< its singular vectors
    Rows singular;          ///< its singular values, descending
    double regularity = 0;  ///< the smallest that counts; 0 where two solution curves meet
    double bend = 0, bend_second = 0;
  };

  ArcTracker(const Dynamic& task, int piece);

  /// Takes a place on the curve as the new origin; the tangent is the one with a growing (or, with
  /// `backwards`, falling) fraction.
  void start(double fraction, const JointVector& q, bool backwards = false);
  /// The same with a given sense of the tangent (its inner product with `sense` is positive).
  void start(double fraction, const JointVector& q, const Unknowns& sense);

  [[nodiscard]] const Place& place() const { return place_; }
  /// Makes one proven step of at most `most` arc length. False if the corrector failed.
  [[nodiscard]] bool advance(double most, Step& step);
  [[nodiscard]] Node node(const Place& place) const;
  /// The exact place at arc length t of a step (made by any ArcTracker for this task and piece).
  void at(const Step& step, double t, Node& out) const;
  [[nodiscard]] double unit() const { return unit_; }

  /// Where the curve, followed from the current place, nearly meets another one: the place at which the
  /// linearised task loses rank, reached by the smallest change of the target.
  struct Meeting {
    double fraction = 0;
    Unknowns y;
    double position_miss = 0;     ///< mm that the target misses it by
    double orientation_miss = 0;  ///< rad
    Unknowns ahead;               ///< unit tangent of the smooth continuation of the current curve through it
    bool crosses = false;         ///< two real curves cross there
  };
  [[nodiscard]] std::optional<Meeting> meeting() const;

  /// Jumps to the place that lies `beyond` further along `meeting.ahead`, corrected to the task; where that
  /// would lie past the fraction `most`, to the place at that fraction. False if that fails.
  [[nodiscard]] bool cross(const Meeting& meeting, double beyond, double most, Step& step);
  /// Ends at the meeting itself, which lies at the end of the piece.
  void stop_at(const Meeting& meeting, double fraction, Step& step) const;

 private:
  void compute(Place& place, const Unknowns& sense) const;
  void linearise(Place& place) const;
  [[nodiscard]] Unknowns solve(const Place& place, const Rows& right_side) const;
  [[nodiscard]] bool correct(Place& place, const Unknowns& base, const Unknowns& border, double along) const;
  void set(Place& place, const Unknowns& y) const;
  [[nodiscard]] Rows bilinear(const Place& place, const Unknowns& a, const Unknowns& b) const;

  const Dynamic& task_;
  int piece_;
  int joints_;
  double unit_ = 1;
  Place place_;
};

}  // namespace pathvet
