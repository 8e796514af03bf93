#include "pathvet/retiming/stretches.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <limits>

namespace pathvet {
namespace {

constexpr int candidates = 300;  // of cuts, at first
constexpr int refinements = 4;   // each makes the places of the cuts `finer` times finer
constexpr int finer = 8;
constexpr double low_share = 1e-3;  // of the greatest density; steepness below it doesn't count
constexpr double worth = 2e-3;      // more cuts have to gain this share of the time
constexpr std::array<double, 3> inner = {0.25, 0.5, 0.75};  // places between nodes that are looked at

double value_at(const Density& d, double fraction) {
  const auto after = std::ranges::upper_bound(d.fraction, fraction);
  const auto i = static_cast<std::size_t>(after - d.fraction.begin());
  if (i == 0) return d.value.front();
  if (i == d.fraction.size()) return d.value.back();
  const double share = (fraction - d.fraction[i - 1]) / (d.fraction[i] - d.fraction[i - 1]);
  return d.value[i - 1] + share * (d.value[i] - d.value[i - 1]);
}

/// Places for cuts, even in a measure that counts the way and, as much, the steepness.
std::vector<double> spread_candidates(const Density& d, const StretchOptions& o) {
  std::vector<double> places, measure;
  double sum = 0;
  double variation = 0;
  const double floor = std::max(o.floor, low_share * d.peak(0, 1).value);
  const auto level = [&](std::size_t i) { return std::log(std::max(d.value[i], floor)); };
  for (std::size_t i = 1; i < d.value.size(); ++i) variation += std::abs(level(i) - level(i - 1));
  const double scale = variation > 0 ? 1 / variation : 0;
  for (std::size_t i = 0; i < d.value.size(); ++i) {
    if (i > 0) sum += d.fraction[i] - d.fraction[i - 1] + scale * std::abs(level(i) - level(i - 1));
    measure.push_back(sum);
  }
  std::size_t at = 0;
  for (int k = 1; k < candidates; ++k) {
    const double wanted = sum * k / candidates;
    while (measure[at + 1] < wanted) ++at;
    const double width = measure[at + 1] - measure[at];
    const double share = width > 0 ? (wanted - measure[at]) / width : 0;
    const double place = d.fraction[at] + share * (d.fraction[at + 1] - d.fraction[at]);
    if (place <= o.first_cut || place >= o.last_cut) continue;
    if (places.empty() || place > places.back()) places.push_back(place);
  }
  if (o.first_cut > 0 && o.first_cut < 1 && o.first_cut <= o.last_cut)
    places.insert(places.begin(), o.first_cut);
  if (o.last_cut < 1 && o.last_cut > o.first_cut) places.push_back(o.last_cut);
  return places;
}

/// Adds the vertex of the parabola through each local maximum and its neighbours, where one limit asks for
/// all three.
Density with_peaks(const Density& d) {
  Density out;
  for (std::size_t i = 0; i < d.value.size(); ++i) {
    out.add(d.fraction[i], d.value[i], d.limit[i]);
    if (i == 0 || i + 1 == d.value.size()) continue;
    const double left = d.fraction[i] - d.fraction[i - 1];
    const double right = d.fraction[i + 1] - d.fraction[i];
    const bool one = d.limit[i] >= 0 && d.limit[i - 1] == d.limit[i] && d.limit[i + 1] == d.limit[i];
    if (!one || !(left > 0) || !(right > 0) || d.value[i] < d.value[i - 1] || d.value[i] < d.value[i + 1])
      continue;
    const double rise = (d.value[i] - d.value[i - 1]) / left;
    const double fall = (d.value[i] - d.value[i + 1]) / right;
    const double bend = (rise + fall) / (left + right);  // minus half the second derivative
    const double slope = (rise * right - fall * left) / (left + right);
    if (!(bend > 0)) continue;
    const double ahead = std::clamp(slope / (2 * bend), -left, right);
    const double top = d.value[i] + ahead * (slope - bend * ahead);
    if (ahead == 0 || top <= d.value[i]) continue;
    if (ahead < 0) {
      out.fraction.back() += ahead;
      out.value.back() = top;
      out.add(d.fraction[i], d.value[i], d.limit[i]);
    } else {
      out.add(d.fraction[i] + ahead, top, d.limit[i]);
    }
  }
  return out;
}

struct Partition {
  double time = std::numeric_limits<double>::infinity();
  std::vector<double> cuts;
};

/// The best partitions with 0, 1, ... cuts among `places`.
std::vector<Partition> solve(const Density& d, const StretchOptions& o, const std::vector<double>& places) {
  std::vector<double> at{0.0};
  at.insert(at.end(), places.begin(), places.end());
  at.push_back(1.0);
  const std::size_t n = at.size();
  std::vector<double> cell(n - 1);  // the greatest density between neighbouring places
  for (std::size_t i = 0; i + 1 < n; ++i) cell[i] = std::max(o.floor, d.peak(at[i], at[i + 1]).value);
  const auto most = static_cast<std::size_t>(o.most_cuts) + 1;
  const double never = std::numeric_limits<double>::infinity();
  std::vector<std::vector<double>> best(most + 1, std::vector<double>(n, never));
  std::vector<std::vector<std::size_t>> from(most + 1, std::vector<std::size_t>(n, 0));
  best[0][0] = 0;
  for (std::size_t j = 1; j < n; ++j) {
    double level = j + 1 == n ? o.last_floor : 0.0;
    for (std::size_t i = j; i-- > 0;) {
      level = std::max(level, cell[i]);
      if (i == 0) level = std::max(level, o.first_floor);
      if (at[j] - at[i] < o.least && !(i == 0 && j + 1 == n)) continue;
      const double cost = (at[j] - at[i]) * level;
      for (std::size_t k = 1; k <= most; ++k) {
        if (best[k - 1][i] + cost < best[k][j]) {
          best[k][j] = best[k - 1][i] + cost;
          from[k][j] = i;
        }
      }
    }
  }
  std::vector<Partition> out(most);
  for (std::size_t k = 1; k <= most; ++k) {
    out[k - 1].time = best[k][n - 1];
    if (!std::isfinite(best[k][n - 1])) continue;
    std::size_t j = n - 1;
    for (std::size_t left = k; left > 1; --left) {
      j = from[left][j];
      out[k - 1].cuts.insert(out[k - 1].cuts.begin(), at[j]);
    }
  }
  return out;
}

/// `places` round each cut: the cells beside it, cut finer.
std::vector<double> refined(const std::vector<double>& cuts, std::vector<double> places, double low,
                            double high) {
  std::vector<double> out;
  places.insert(places.begin(), low);
  places.push_back(high);
  for (double cut : cuts) {
    const auto i = static_cast<std::size_t>(std::ranges::lower_bound(places, cut) - places.begin());
    const double left = i > 0 ? places[i - 1] : places[i];
    const double right = i + 1 < places.size() ? places[i + 1] : places[i];
    for (int k = 0; k <= finer; ++k) {
      out.push_back(left + (cut - left) * k / finer);
      out.push_back(cut + (right - cut) * k / finer);
    }
  }
  std::ranges::sort(out);
  out.erase(std::unique(out.begin(), out.end()), out.end());
  std::erase_if(out, [&](double place) { return place < low || place > high || place <= 0 || place >= 1; });
  return out;
}

}  // namespace

Density::Peak Density::peak(double from, double to) const {
  Peak out;
  const auto take = [&](double at, double needed, int of) {
    if (needed > out.value) out = {needed, at, of};
  };
  const auto first = static_cast<std::size_t>(std::ranges::lower_bound(fraction, from) - fraction.begin());
  const auto nearest_limit = [&](double at) {
    const auto i = static_cast<std::size_t>(std::ranges::lower_bound(fraction, at) - fraction.begin());
    return limit[std::min(i, limit.size() - 1)];
  };
  take(from, value_at(*this, from), nearest_limit(from));
  for (std::size_t i = first; i < fraction.size() && fraction[i] <= to; ++i)
    take(fraction[i], value[i], limit[i]);
  // Approached from the left where the density jumps at `to`.
  const auto last = static_cast<std::size_t>(std::ranges::lower_bound(fraction, to) - fraction.begin());
  if (last > 0 && last < fraction.size() && fraction[last] > to)
    take(to, value_at(*this, to), nearest_limit(to));
  return out;
}

double Density::integral(double floor) const {
  double sum = 0;
  for (std::size_t i = 1; i < fraction.size(); ++i) {
    const double h = fraction[i] - fraction[i - 1];
    const double low = std::min(value[i], value[i - 1]);
    const double high = std::max(value[i], value[i - 1]);
    if (high <= floor) {
      sum += h * floor;
    } else if (low >= floor) {
      sum += 0.5 * h * (low + high);
    } else {
      const double share = (high - floor) / (high - low);
      sum += h * (floor + 0.5 * share * (high - floor));
    }
  }
  return sum;
}

Density needed_density(const RecordedSegment& segment, const std::vector<RateLimit>& limits,
                       bool accelerations, bool legs_only) {
  Density out;
  const auto add = [&](const CurveNode& node) {
    double worst = 0;
    int which = -1;
    std::size_t external = 0;
    const bool skipped = legs_only && segment.motion && segment.motion->is_corner(node.piece);
    for (std::size_t i = 0; i < limits.size(); ++i) {
      const RateLimit& limit = limits[i];
      const double rate = limit.terms.empty() ? segment.external[external++] : limit.of(node.first);
      if (skipped) continue;
      double needed = limit.speed ? std::abs(rate) / *limit.speed : 0.0;
      if (accelerations && limit.acceleration && !limit.terms.empty())
        needed = std::max(needed, std::sqrt(std::abs(limit.of(node.second)) / *limit.acceleration));
      if (needed > worst) {
        worst = needed;
        which = static_cast<int>(i);
      }
    }
    out.add(node.fraction, worst, which);
  };
  for (std::size_t i = 0; i < segment.nodes.size(); ++i) {
    if (i > 0 && segment.nodes[i].piece == segment.nodes[i - 1].piece) {
      for (double share : inner) add(between(segment.nodes[i - 1], segment.nodes[i], share));
    }
    add(segment.nodes[i]);
  }
  return with_peaks(out);
}

std::vector<Stretch> best_stretches(const Density& density, const StretchOptions& options) {
  std::vector<double> cuts;
  const double needed = std::max({density.peak(0, 1).value, options.first_floor, options.last_floor});
  const bool calm = needed <= options.floor;
  if (!calm && options.most_cuts > 0 && options.first_cut <= options.last_cut) {
    std::vector<double> places = spread_candidates(density, options);
    const std::vector<Partition> found = solve(density, options, places);
    const double best = found.back().time;
    double least = best;
    for (const Partition& p : found) least = std::min(least, p.time);
    for (const Partition& p : found) {
      cuts = p.cuts;
      if (p.time <= least * (1 + worth)) break;
    }
    StretchOptions polish = options;
    polish.most_cuts = static_cast<int>(cuts.size());
    const double low = std::max(0.0, options.first_cut);
    const double high = std::min(1.0, options.last_cut);
    for (int round = 0; round < refinements && !cuts.empty(); ++round) {
      places = refined(cuts, places, low, high);
      const std::vector<Partition> again = solve(density, polish, places);
      if (!std::isfinite(again.back().time)) break;
      cuts = again.back().cuts;
    }
  }
  std::vector<Stretch> out;
  double begin = 0;
  cuts.push_back(1);
  for (double end : cuts) {
    const Density::Peak peak = density.peak(begin, end);
    Stretch stretch{begin, end, options.floor, -1, peak.fraction};
    const auto raise = [&](double value, int limit, double where) {
      if (value <= stretch.density) return;
      stretch.density = value;
      stretch.limit = limit;
      stretch.where = where;
    };
    raise(peak.value, peak.limit, peak.fraction);
    if (begin == 0) raise(options.first_floor, peak.limit, 0);
    if (end == 1) raise(options.last_floor, peak.limit, 1);
    out.push_back(stretch);
    begin = end;
  }
  return out;
}

double total_time(const std::vector<Stretch>& stretches) {
  double sum = 0;
  for (const Stretch& stretch : stretches) sum += (stretch.end - stretch.begin) * stretch.density;
  return sum;
}

}  // namespace pathvet
