#pragma once

#include <optional>
#include <vector>

#include "pathvet/retiming/recording.hpp"

namespace pathvet {

/// What the joints' limits allow on one rounded corner, as constraints on the squares of the speeds before
/// and after it: low <= before * v1^2 + after * v2^2 <= high. Exact at every node of the recording.
/// docs/retiming.md, "Corners".
class CornerLimits {
 public:
  /// The corner between two neighbouring segments; none if it is not rounded. `limits`: with any reserve
  /// taken off.
  static std::optional<CornerLimits> between(const RecordedSegment& in, const RecordedSegment& out,
                                             const std::vector<RateLimit>& limits);

  /// The greatest speed (mm/s) that may be had on both sides at once, with the limit that sets it.
  [[nodiscard]] double common_speed() const { return common_speed_; }
  [[nodiscard]] int common_limit() const { return common_limit_; }
  [[nodiscard]] bool holds(double before, double after) const;
  /// The greatest speed on one side up to `wanted`, with the other side's given. At least `other` if that is
  /// at most common_speed().
  [[nodiscard]] double most_before(double after, double wanted) const;
  [[nodiscard]] double most_after(double before, double wanted) const;

 private:
  struct Constraint {
    double before = 0, after = 0, bound = 0;  // |before v1^2 + after v2^2| <= bound
    int limit = -1;
  };

  void add_half(const RecordedSegment& segment, bool second, const std::vector<RateLimit>& limits);
  [[nodiscard]] double most(double other, double wanted, bool raise_after) const;

  double size_ = 0;                    // mm
  double rate_in_ = 0, rate_out_ = 0;  // of the curve parameter, 1/s, as programmed
  std::vector<Constraint> constraints_;
  double common_speed_ = 0;
  int common_limit_ = -1;
};

}  // namespace pathvet
