#include "pathvet/retiming/corners.hpp"

#include <algorithm>
#include <cmath>
#include <limits>

namespace pathvet {
namespace {

/// Rounding that a constraint may be missed by, as a share of its bound.
constexpr double slack = 1e-12;

double leg_speed(const RecordedSegment& segment) {
  return segment.motion->leg().length() / segment.motion->leg_duration();
}

}  // namespace

std::optional<CornerLimits> CornerLimits::between(const RecordedSegment& in, const RecordedSegment& out,
                                                  const std::vector<RateLimit>& limits) {
  if (!in.motion || !out.motion || !(in.motion->blend_out() > 0)) return std::nullopt;
  CornerLimits corner;
  corner.size_ = in.motion->blend_out();
  corner.rate_in_ = leg_speed(in) / (2 * corner.size_);
  corner.rate_out_ = leg_speed(out) / (2 * corner.size_);
  corner.add_half(in, false, limits);
  corner.add_half(out, true, limits);
  double least = std::numeric_limits<double>::infinity();
  for (const Constraint& c : corner.constraints_) {
    const double sum = std::abs(c.before + c.after);
    if (sum * least <= c.bound) continue;
    least = c.bound / sum;
    corner.common_limit_ = c.limit;
  }
  corner.common_speed_ = std::sqrt(least);
  return corner;
}

/// The nodes on one half of the corner. With the curve parameter u: q_t = q_u r, q_tt = q_uu r^2 + q_u g,
/// where the rate r of u goes evenly in time, so that r^2 = r1^2 + 2 g u and g = (r2^2 - r1^2) / 2; r = v /
/// (2 size).
void CornerLimits::add_half(const RecordedSegment& segment, bool second,
                            const std::vector<RateLimit>& limits) {
  const SegmentMotion& motion = *segment.motion;
  const int piece = second ? 0 : motion.piece_count() - 1;
  const double g = 0.5 * (rate_out_ * rate_out_ - rate_in_ * rate_in_);
  const double begin = motion.piece_begin(piece);
  const double scale = 1 / (4 * size_ * size_);  // v^2 to r^2
  for (const CurveNode& node : segment.nodes) {
    if (node.piece != piece) continue;
    // The first half begins at u = 0; the second one at u = 1/2.
    const double time = (node.fraction - begin) * segment.duration;
    const double rate_begin = second ? std::sqrt(rate_in_ * rate_in_ + g) : rate_in_;
    const double u = std::clamp((second ? 0.5 : 0.0) + time * (rate_begin + 0.5 * g * time), 0.0, 1.0);
    const double r2 = (1 - u) * rate_in_ * rate_in_ + u * rate_out_ * rate_out_;
    for (std::size_t i = 0; i < limits.size(); ++i) {
      const RateLimit& limit = limits[i];
      if (limit.terms.empty()) continue;
      const double by_t = limit.of(node.first) / segment.duration;
      const double by_tt = limit.of(node.second) / (segment.duration * segment.duration);
      const double by_u = by_t / std::sqrt(r2);
      const double by_uu = (by_tt - by_u * g) / r2;
      const int index = static_cast<int>(i);
      if (limit.speed && by_u != 0) {
        const double bound = std::pow(*limit.speed, 2) / (by_u * by_u * scale);
        constraints_.push_back({1 - u, u, bound, index});
      }
      if (limit.acceleration) {
        constraints_.push_back({scale * (by_uu * (1 - u) - 0.5 * by_u), scale * (by_uu * u + 0.5 * by_u),
                                *limit.acceleration, index});
      }
    }
  }
}

bool CornerLimits::holds(double before, double after) const {
  return std::ranges::all_of(constraints_, [&](const Constraint& c) {
    return std::abs(c.before * before * before + c.after * after * after) <= c.bound * (1 + slack);
  });
}

double CornerLimits::most(double other, double wanted, bool raise_after) const {
  double square = wanted * wanted;
  for (const Constraint& c : constraints_) {
    const double own = raise_after ? c.after : c.before;
    const double given = (raise_after ? c.before : c.after) * other * other;
    if (own == 0) continue;
    // |given + own x| <= bound with x growing: the side that own points to.
    const double most = ((own > 0 ? c.bound : -c.bound) - given) / own;
    square = std::min(square, std::max(0.0, most));
  }
  return std::sqrt(square);
}

double CornerLimits::most_before(double after, double wanted) const {
  return most(after, wanted, false);
}
double CornerLimits::most_after(double before, double wanted) const {
  return most(before, wanted, true);
}

}  // namespace pathvet
