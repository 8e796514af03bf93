#pragma once

#include <vector>

#include "reference_arm.hpp"

namespace pathvet::test {

/// A straight line with the orientation turning evenly about one axis, the short way.
class ReferenceMotion {
 public:
  ReferenceMotion(const Pose& start, const Pose& end, double speed, double turn_rate);
  [[nodiscard]] MovingTarget at(double fraction) const;
  [[nodiscard]] double length() const { return (end_ - start_.position).norm(); }
  [[nodiscard]] double turn() const { return spin_.norm(); }
  [[nodiscard]] double duration() const { return duration_; }

 private:
  Pose start_;
  Vector3 end_;
  Eigen::Quaterniond from_, to_;
  Vector3 spin_;
  double duration_;
};

struct Sample {
  double fraction = 0;
  Column q, rate;  ///< natural, by the fraction
  double singular = 0;
  bool bridge =
      false;  ///< the stretch that begins here crosses an exact singularity: interpolated, not solved
};

/// How a track ended.
enum class TrackEnd { complete, stuck, unclear };

struct Track {
  std::vector<Sample> samples;
  TrackEnd end = TrackEnd::complete;
  bool detour =
      false;  ///< an exact pass was missed by more than rounding: the smooth curve is not quite the track
  std::vector<double>
      flips;  ///< fractions of exact passes that were crossed with another sign of the determinant
};

/// Follows the motion from q at `from` by small adaptive Newton steps, to the end or to where no step
/// succeeds.
[[nodiscard]] Track follow(const ReferenceArm& arm, const ReferenceMotion& motion, double from,
                           const Column& q);

/// The exact sample at a fraction inside the stretch that begins at sample `index`.
[[nodiscard]] Sample between(const ReferenceArm& arm, const ReferenceMotion& motion, const Track& track,
                             std::size_t index, double fraction);

/// By how much the path misses a singular configuration, and where.
struct SingularMiss {
  double fraction = 0;
  double length = 0;  ///< mm
  double turn = 0;    ///< rad
  Column q;           ///< the singular configuration
};

/// The least miss (weighted as exact passes are), sought from a sample of the path's track.
[[nodiscard]] SingularMiss miss_of_singular(const ReferenceArm& arm, const ReferenceMotion& motion,
                                            const Sample& near);

}  // namespace pathvet::test
