#pragma once

#include <limits>

#include "pathvet/kinematics/chain.hpp"

namespace pathvet {

/// A place on the tracked curve with its exact derivatives by the step's own parameter t: the fraction
/// itself, or, near singularities, the arc length of the curve in (joints, fraction).
struct Node {
  double fraction = 0;
  double fraction_rate = 1;  ///< d fraction / dt; 0 at a fold, where joint speeds grow without bound
  double fraction_rate_rate = 0;
  JointVector q;            ///< rad or mm
  JointVector rate;         ///< dq/dt
  JointVector rate_rate;    ///< d2q/dt2
  double singular_low = 0;  ///< lower bound of the smallest singular value
};

/// The stretch between two neighbouring nodes, with bounds on what the exact curve may do in between.
struct Step {
  enum class Kind {
    fraction,     ///< t is the fraction
    arc,          ///< t is arc length
    interpolated  ///< across an exact singularity: the curve is the quintic Hermite polynomial through both
                  ///< nodes
  };
  Kind kind = Kind::fraction;
  int piece = 0;
  double length = 0;         ///< of t
  double fraction_unit = 1;  ///< arc steps: the fraction per unit of its share in the arc length
  Node begin, end;
  /// Inverse of the scaled Jacobian at the end, where the follower has it at hand; valid while the step is
  /// handed on.
  const Eigen::Matrix<double, 6, 6>* end_inverse = nullptr;
  /// The chain at the end, likewise (taken before a last correction of at most 2e-11).
  const ChainState<6>* end_chain = nullptr;
  bool proven = false;  ///< continuity is proven: both ends lie on one smooth branch
  // Bounds on the norm of the first three derivatives, by t, of the joints (scaled: prismatic over the
  // characteristic length); of arc steps the fraction's share is included. Infinite where nothing is proven.
  double rate_bound = std::numeric_limits<double>::infinity();
  double second_bound = std::numeric_limits<double>::infinity();
  double third_bound = std::numeric_limits<double>::infinity();
  double singular_slope = std::numeric_limits<double>::infinity();  ///< on |d smallest singular value / dt|
};

/// Exact places inside a step: predictor from the ends, corrected to the asked pose.
class StepSampler {
 public:
  virtual ~StepSampler() = default;
  virtual void at(const Step& step, double t, Node& out) const = 0;
};

}  // namespace pathvet
