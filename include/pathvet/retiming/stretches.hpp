#pragma once

#include <vector>

#include "pathvet/retiming/recording.hpp"

namespace pathvet {

/// How much time a segment needs per unit of its fraction, place by place; the value between two points is on
/// the straight line between theirs. 1 / density is the greatest rate of the fraction.
struct Density {
  std::vector<double> fraction;  ///< ascending; a jump has two points at one fraction
  std::vector<double> value;     ///< s
  std::vector<int> limit;        ///< which of the rate limits asks for it; -1: none does

  void add(double at, double needed, int of) {
    fraction.push_back(at);
    value.push_back(needed);
    limit.push_back(of);
  }
  /// Greatest value on [from, to] with its place.
  struct Peak {
    double value = 0, fraction = 0;
    int limit = -1;
  };
  [[nodiscard]] Peak peak(double from, double to) const;
  /// Integral of max(value, floor): the least time of the segment.
  [[nodiscard]] double integral(double floor) const;
};

/// What the speed limits alone ask for; with `accelerations`, also what a constant rate of the fraction needs
/// so that no joint's |q''| (ds/dt)^2 exceeds its limit. `legs_only`: pieces that round a corner count as
/// asking for nothing.
[[nodiscard]] Density needed_density(const RecordedSegment& segment, const std::vector<RateLimit>& limits,
                                     bool accelerations, bool legs_only);

/// A part of a segment that runs at one constant rate of the fraction.
struct Stretch {
  double begin = 0, end = 1;  ///< fractions
  double density = 0;         ///< s per unit of the fraction
  int limit = -1;             ///< the rate limit that sets it; -1: the programmed speed
  double where = 0;           ///< fraction at which it does
};

struct StretchOptions {
  int most_cuts = 8;
  double floor = 0;        ///< density of the programmed speed
  double first_floor = 0;  ///< densities that the first and the last stretch need besides (corners)
  double last_floor = 0;
  double first_cut = 0, last_cut = 1;  ///< fractions between which cuts may be
  double least = 0;                    ///< of a stretch's length, in fractions
};

/// The partition into at most most_cuts + 1 stretches of constant density that takes the least time: a
/// dynamic programme over candidate cuts, dense where the density is steep, refined round the cuts that it
/// finds. Cuts that gain next to nothing are left out. docs/retiming.md, "Stretches".
[[nodiscard]] std::vector<Stretch> best_stretches(const Density& density, const StretchOptions& options);

/// Sum of length times density.
[[nodiscard]] double total_time(const std::vector<Stretch>& stretches);

}  // namespace pathvet
