#pragma once

#include <optional>
#include <string>
#include <vector>

#include "pathvet/checks/check_path.hpp"
#include "pathvet/model/cell.hpp"
#include "pathvet/motion/segment_motion.hpp"

namespace pathvet {

/// A bound on the rate of a joint, of a combined limit's linear combination of joints, or of a positioner's
/// joint.
struct RateLimit {
  struct Term {
    int joint = 0;
    double factor = 1;
  };
  std::string name;
  std::vector<Term> terms;             ///< empty: a positioner's joint, which goes evenly over each segment
  std::optional<double> speed;         ///< rad/s or mm/s
  std::optional<double> acceleration;  ///< rad/s^2 or mm/s^2

  [[nodiscard]] double of(const JointVector& joints) const {
    double sum = 0;
    for (const Term& term : terms) sum += term.factor * joints[term.joint];
    return sum;
  }
};

/// The limits in the order of PathResult::axes, each kept free of `reserve` (a share of its size, 0 to below
/// 1).
[[nodiscard]] std::vector<RateLimit> rate_limits(const Cell& cell, double reserve);

/// A place on the curve that the joints follow over one segment. Derivatives by the segment's fraction,
/// exact.
struct CurveNode {
  double fraction = 0;
  int piece = 0;
  JointVector q;        ///< rad or mm
  JointVector first;    ///< dq/ds
  JointVector second;   ///< d2q/ds2
  double tcp_rate = 0;  ///< mm per unit of the fraction, in the waypoint's frame
};

/// One segment as it was checked.
struct RecordedSegment {
  int index = 0;                        ///< counts from 1
  std::optional<SegmentMotion> motion;  ///< none: a joint move
  double duration = 0;                  ///< s, as programmed; the fraction grows evenly in it
  std::vector<CurveNode> nodes;  ///< fractions ascend; a change of piece gives two nodes at one fraction
  std::vector<double> external;  ///< change of each positioner joint over the segment
  bool unbounded = false;        ///< a joint's rate grows without bound somewhere
  /// Why no speed helps on it ("the arm changes branch here"); empty: speeds help.
  std::string hopeless;
};

/// A path with its check and the joints' curve of every segment.
struct Recording {
  PathResult result;
  std::vector<RecordedSegment> segments;
};

/// Checks the path and keeps the curve, nodes so dense that the derivatives between them are all but
/// straight. `progress` is asked as a check's observer is. Faults as check_path.
[[nodiscard]] Reading<Recording> record_path(const Path& path, const Cell& cell, const CheckOptions& options,
                                             CheckObserver* progress = nullptr);

/// The curve between two neighbouring nodes of one piece: quintic Hermite interpolation at a share of the
/// interval.
[[nodiscard]] CurveNode between(const CurveNode& a, const CurveNode& b, double share);

}  // namespace pathvet
