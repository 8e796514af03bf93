#include "pathvet/retiming/time_optimal.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <limits>

// An interval from point i to point i + 1, of length h: with x = (rate of the parameter)^2 and its
// acceleration u constant, x is straight, x(t) = x_i + 2 h t u at the share t. A limited axis there asks for
// |first(t) u + second(t) x(t)| <= a, that is |p u + r x_i| <= a with p = first + 2 h t second and r =
// second: a strip in the plane of (x, u) each.

namespace pathvet {
namespace {

constexpr double infinite = std::numeric_limits<double>::infinity();
constexpr std::array<double, 3> asked = {0.0, 0.5, 1.0};  // shares of an interval at which limits are rows
constexpr std::array<double, 5> inspected = {0.0, 0.25, 0.5, 0.75,
                                             1.0};  // and at which the result is looked at
/// Between places that are even in t a smooth function is at most an eighth of its second difference above
/// them; half as much again stands for what is not a parabola.
constexpr double unseen = 1.5 / 8;
/// The excess of a chord over a speed limit, seen at those places, is at most this many times the greatest
/// one seen.
constexpr double unseen_chord = 1.5;
constexpr double near = 0.9;         // share of a limit below which nothing between the places can break it
constexpr int most_rounds = 6;       // of passes with margins
constexpr int most_iterations = 60;  // of Newton's method; it ends after a handful
/// A row whose u counts for so small a share of the steepest row's only bounds x.
constexpr double flat = 1e-9;
constexpr double excess_noise = 1e-12;

/// The strip k x - c <= u <= k x + c.
struct Strip {
  double k = 0, c = 0;
};

/// Cubic with values and slopes at both ends: value and derivative at the share t.
struct Cubic {
  double value, slope;
};
Cubic cubic(double a, double da, double b, double db, double h, double t) {
  const double s = 1 - t;
  const double value =
      a * (1 + 2 * t) * s * s + b * t * t * (3 - 2 * t) + h * (da * t * s * s - db * t * t * s);
  const double slope = 6 * t * s * (b - a) / h + da * s * (1 - 3 * t) + db * t * (3 * t - 2);
  return {value, slope};
}

class Passes {
 public:
  explicit Passes(const SpeedGrid& grid)
      : grid_(grid), n_(grid.points()), margin_((n_ - 1) * grid.axes, 1.0) {
    cap_speeds();
  }

  PathSpeed run(bool rest_at_begin, bool rest_at_end);

 private:
  [[nodiscard]] double length(std::size_t i) const { return grid_.parameter[i + 1] - grid_.parameter[i]; }
  [[nodiscard]] Cubic at(std::size_t i, std::size_t axis, double t) const {
    const std::size_t a = i * grid_.axes + axis;
    const std::size_t b = a + grid_.axes;
    return cubic(grid_.first[a], grid_.second[a], grid_.first[b], grid_.second[b], length(i), t);
  }
  void cap_speeds();
  void make_rows();
  void backward(bool rest_at_end);
  void forward(bool rest_at_begin, PathSpeed& out) const;
  [[nodiscard]] double highest(std::size_t i, double next) const;
  bool tighten(const PathSpeed& speed);

  const SpeedGrid& grid_;
  std::size_t n_;
  double excess_ = 0;            // over an acceleration limit, as the last look found it
  std::vector<bool> changed_;    // intervals whose margins it lowered
  std::vector<double> margin_;   // factor on each axis' acceleration, interval by interval
  std::vector<double> cap_;      // of x, by speeds and the ceiling
  std::vector<double> row_cap_;  // of x, by rows without u
  std::vector<Strip> rows_;
  std::vector<std::size_t> row_begin_, row_end_;
  std::vector<double> reach_;  // the greatest x from which the rest can be done
};

/// The greatest x that speeds allow at each point, lowered where the chord to the next one would exceed what
/// they allow in between.
void Passes::cap_speeds() {
  cap_.assign(n_, infinite);
  for (std::size_t i = 0; i < n_; ++i) {
    cap_[i] = grid_.ceiling[i] * grid_.ceiling[i];
    for (std::size_t k = 0; k < grid_.axes; ++k) {
      const double rate = std::abs(grid_.first[i * grid_.axes + k]);
      if (rate > 0) cap_[i] = std::min(cap_[i], std::pow(grid_.speed[k] / rate, 2));
    }
  }
  std::vector<double> lowered = cap_;
  for (std::size_t i = 0; i + 1 < n_; ++i) {
    if (!(length(i) > 0)) continue;
    double excess = 1;
    for (double t : inspected) {
      double bound = infinite;
      for (std::size_t k = 0; k < grid_.axes; ++k) {
        if (!std::isfinite(grid_.speed[k])) continue;
        const double rate = std::abs(at(i, k, t).value);
        if (rate > 0) bound = std::min(bound, std::pow(grid_.speed[k] / rate, 2));
      }
      const double chord = std::min(cap_[i], 1e300) * (1 - t) + std::min(cap_[i + 1], 1e300) * t;
      if (std::isfinite(bound)) excess = std::max(excess, chord / bound);
    }
    if (excess > 1) {
      excess = 1 + unseen_chord * (excess - 1);
      lowered[i] = std::min(lowered[i], cap_[i] / excess);
      lowered[i + 1] = std::min(lowered[i + 1], cap_[i + 1] / excess);
    }
  }
  cap_ = std::move(lowered);
}

void Passes::make_rows() {
  const std::size_t slots = grid_.axes * asked.size();
  const bool all = rows_.empty();
  if (all) {
    rows_.resize((n_ - 1) * slots);
    row_begin_.resize(n_ - 1);
    row_end_.resize(n_ - 1);
    row_cap_.assign(n_, infinite);
  }
  struct Raw {
    double p, r;
  };
  std::vector<Raw> raw;
  for (std::size_t i = 0; i + 1 < n_; ++i) {
    if (!all && !changed_[i]) continue;
    const double h = length(i);
    raw.clear();
    double steepest = 0;
    row_begin_[i] = row_end_[i] = i * slots;
    row_cap_[i] = infinite;
    for (std::size_t k = 0; k < grid_.axes; ++k) {
      const double limit = grid_.acceleration[k] * margin_[i * grid_.axes + k];
      if (!std::isfinite(limit)) continue;
      if (!(h > 0)) {
        for (std::size_t end : {i, i + 1}) {
          const double second = std::abs(grid_.second[end * grid_.axes + k]);
          if (second > 0 && grid_.first[end * grid_.axes + k] == 0)
            row_cap_[i] = std::min(row_cap_[i], limit / second);
        }
        continue;
      }
      for (double t : asked) {
        const Cubic c = at(i, k, t);
        const Raw row{(c.value + 2 * h * t * c.slope) / limit, c.slope / limit};
        steepest = std::max(steepest, std::abs(row.p));
        raw.push_back(row);
      }
    }
    for (const Raw& row : raw) {
      const double p = std::abs(row.p);
      if (p > flat * steepest) {
        rows_[row_end_[i]++] = {-row.r / row.p, 1 / p};
      } else if (row.r != 0) {
        row_cap_[i] = std::min(row_cap_[i], 1 / std::abs(row.r));
      }
    }
  }
}

/// The greatest x at point i for which some u keeps the rows and leads to at most `next` (and at least 0) at
/// point i + 1: a linear program in two variables. The width of the interval that is left to u is concave in
/// x, straight in pieces and not negative at 0; its root is approached from above by Newton's method, exactly
/// and in a few steps.
double Passes::highest(std::size_t i, double next) const {
  double x = std::min(cap_[i], row_cap_[i]);
  const double h = length(i);
  if (!(h > 0)) return std::min(x, next);
  const double slope = -0.5 / h;
  if (!std::isfinite(x)) x = 1e300;
  for (int iteration = 0; iteration < most_iterations; ++iteration) {
    double low = slope * x;
    double low_k = slope, low_c = 0;
    double high = std::isfinite(next) ? slope * x + next * (0.5 / h) : infinite;
    double high_k = slope, high_c = std::isfinite(next) ? next * (0.5 / h) : infinite;
    for (std::size_t r = row_begin_[i]; r < row_end_[i]; ++r) {
      const Strip& row = rows_[r];
      const double middle = row.k * x;
      if (middle - row.c > low) {
        low = middle - row.c;
        low_k = row.k;
        low_c = row.c;
      }
      if (middle + row.c < high) {
        high = middle + row.c;
        high_k = row.k;
        high_c = row.c;
      }
    }
    if (high >= low || !(low_k > high_k)) break;
    const double root = (low_c + high_c) / (low_k - high_k);
    if (!(root < x)) break;
    x = std::max(0.0, root);
  }
  return x;
}

void Passes::backward(bool rest_at_end) {
  reach_.assign(n_, 0.0);
  reach_[n_ - 1] = rest_at_end ? 0.0 : cap_[n_ - 1];
  for (std::size_t i = n_ - 1; i-- > 0;) reach_[i] = highest(i, reach_[i + 1]);
}

void Passes::forward(bool rest_at_begin, PathSpeed& out) const {
  out.square.assign(n_, 0.0);
  out.acceleration.assign(n_ - 1, 0.0);
  out.time.assign(n_, 0.0);
  out.square[0] = rest_at_begin ? 0.0 : reach_[0];
  for (std::size_t i = 0; i + 1 < n_; ++i) {
    const double h = length(i);
    const double x = out.square[i];
    if (!(h > 0)) {
      out.square[i + 1] = std::min(x, reach_[i + 1]);
      out.time[i + 1] = out.time[i];
      continue;
    }
    double low = -0.5 * x / h;
    double high = 0.5 * (reach_[i + 1] - x) / h;
    for (std::size_t r = row_begin_[i]; r < row_end_[i]; ++r) {
      low = std::max(low, rows_[r].k * x - rows_[r].c);
      high = std::min(high, rows_[r].k * x + rows_[r].c);
    }
    const double u = std::max(low, high);  // low <= high up to rounding: x is inside what can be controlled
    out.square[i + 1] = std::clamp(x + 2 * h * u, 0.0, reach_[i + 1]);
    out.acceleration[i] = 0.5 * (out.square[i + 1] - x) / h;
    const double sum = std::sqrt(x) + std::sqrt(out.square[i + 1]);
    out.time[i + 1] = out.time[i] + (sum > 0 ? 2 * h / sum : infinite);
  }
}

/// Lowers the limits of intervals that exceed them between the places asked for. False if none does.
bool Passes::tighten(const PathSpeed& speed) {
  bool any = false;
  excess_ = 0;
  changed_.assign(n_ - 1, false);
  for (std::size_t i = 0; i + 1 < n_; ++i) {
    const double h = length(i);
    if (!(h > 0)) continue;
    for (std::size_t k = 0; k < grid_.axes; ++k) {
      if (!std::isfinite(grid_.acceleration[k])) continue;
      const double u = speed.acceleration[i];
      std::array<double, inspected.size()> value{};
      double worst = 0;
      for (std::size_t s = 0; s < inspected.size(); ++s) {
        const Cubic c = at(i, k, inspected[s]);
        value[s] = c.value * u + c.slope * (speed.square[i] + 2 * h * inspected[s] * u);
        worst = std::max(worst, std::abs(value[s]));
      }
      double bend = 0;
      for (std::size_t s = 1; s + 1 < inspected.size(); ++s)
        bend = std::max(bend, std::abs(value[s - 1] - 2 * value[s] + value[s + 1]));
      if (worst > near * grid_.acceleration[k]) worst += unseen * bend;
      const double ratio = worst / grid_.acceleration[k];
      if (ratio <= 1 + excess_noise) continue;
      excess_ = std::max(excess_, ratio - 1);
      margin_[i * grid_.axes + k] /= ratio;
      changed_[i] = true;
      any = true;
    }
  }
  return any;
}

PathSpeed Passes::run(bool rest_at_begin, bool rest_at_end) {
  PathSpeed out;
  for (int round = 0; round < most_rounds; ++round) {
    make_rows();
    backward(rest_at_end);
    forward(rest_at_begin, out);
    if (!tighten(out)) return out;
  }
  // What the margins have not caught by then is tiny: the whole is slowed down by it.
  const double slower = 1 / (1 + excess_);
  for (double& x : out.square) x *= slower;
  for (double& u : out.acceleration) u *= slower;
  for (double& t : out.time) t /= std::sqrt(slower);
  return out;
}

}  // namespace

double greatest_excess(const SpeedGrid& grid, const PathSpeed& speed, int places) {
  double worst = 0;
  for (std::size_t i = 0; i + 1 < grid.points(); ++i) {
    const double h = grid.parameter[i + 1] - grid.parameter[i];
    if (!(h > 0)) continue;
    const double u = speed.acceleration[i];
    for (int s = 0; s <= places; ++s) {
      const double t = static_cast<double>(s) / places;
      const double x = std::max(0.0, speed.square[i] + 2 * h * t * u);
      for (std::size_t k = 0; k < grid.axes; ++k) {
        const std::size_t a = i * grid.axes + k;
        const std::size_t b = a + grid.axes;
        const Cubic c = cubic(grid.first[a], grid.second[a], grid.first[b], grid.second[b], h, t);
        worst = std::max({worst, std::abs(c.value) * std::sqrt(x) / grid.speed[k] - 1,
                          std::abs(c.value * u + c.slope * x) / grid.acceleration[k] - 1});
      }
    }
  }
  return worst;
}

PathSpeed time_optimal_speed(const SpeedGrid& grid, bool rest_at_begin, bool rest_at_end) {
  return Passes(grid).run(rest_at_begin, rest_at_end);
}

}  // namespace pathvet
