#include "pathvet/reporting/curves.hpp"

#include <algorithm>
#include <cmath>
#include <iterator>
#include <limits>
#include <tuple>

namespace pathvet {
namespace {

constexpr std::size_t columns_beside_values = 5;  // segment, fraction, length, time, place in the world
constexpr std::size_t least_rows = 500;           // of a path, however many share the report

bool comes_before(const CurveRow& a, const CurveRow& b) {
  return std::tie(a.segment, a.fraction) < std::tie(b.segment, b.fraction);
}

std::vector<double> external_values(const Waypoint& waypoint) {
  std::vector<double> all;
  for (const JointVector& joints : waypoint.external) all.insert(all.end(), joints.begin(), joints.end());
  return all;
}

}  // namespace

void CurveThinner::add(CurveRow row) {
  if (buckets_.empty() || in_last_ == span_) {
    if (!buckets_.empty()) {
      if (thinning_) thin(buckets_.back());
      closed_rows_ += buckets_.back().size();
      if (closed_rows_ > most_rows_) shrink();
    }
    buckets_.emplace_back();
    in_last_ = 0;
  }
  Bucket& bucket = buckets_.back();
  bucket.insert(std::upper_bound(bucket.begin(), bucket.end(), row, comes_before), std::move(row));
  ++in_last_;
}

void CurveThinner::thin(Bucket& bucket) {
  if (bucket.size() < 3) return;
  std::vector<bool> kept(bucket.size(), false);
  kept.front() = kept.back() = true;
  for (std::size_t value = 0; value < bucket.front().values.size(); ++value) {
    constexpr std::size_t none = std::numeric_limits<std::size_t>::max();
    std::size_t least = none;
    std::size_t greatest = none;
    for (std::size_t i = 0; i < bucket.size(); ++i) {
      const double x = bucket[i].values[value];
      if (std::isnan(x)) continue;
      if (least == none || x < bucket[least].values[value]) least = i;
      if (greatest == none || x > bucket[greatest].values[value]) greatest = i;
    }
    if (least != none) kept[least] = kept[greatest] = true;
  }
  Bucket rest;
  for (std::size_t i = 0; i < bucket.size(); ++i) {
    if (kept[i]) rest.push_back(std::move(bucket[i]));
  }
  bucket = std::move(rest);
}

/// Brings what is kept below the bound: buckets are thinned, then become one with their neighbour as often as
/// it takes.
void CurveThinner::shrink() {
  if (!thinning_) {
    thinning_ = true;
    for (Bucket& bucket : buckets_) thin(bucket);
    count();
  }
  while (closed_rows_ > most_rows_ && buckets_.size() > 1) {
    std::vector<Bucket> merged;
    for (std::size_t i = 0; i < buckets_.size(); i += 2) {
      Bucket bucket = std::move(buckets_[i]);
      if (i + 1 < buckets_.size()) std::ranges::move(buckets_[i + 1], std::back_inserter(bucket));
      thin(bucket);
      merged.push_back(std::move(bucket));
    }
    buckets_ = std::move(merged);
    span_ *= 2;
    count();
  }
}

void CurveThinner::count() {
  closed_rows_ = 0;
  for (const Bucket& bucket : buckets_) closed_rows_ += bucket.size();
}

std::vector<CurveRow> CurveThinner::take() {
  std::vector<CurveRow> rows;
  for (Bucket& bucket : buckets_) std::ranges::move(bucket, std::back_inserter(rows));
  // A late row may have missed its bucket by one.
  std::ranges::stable_sort(rows, comes_before);
  *this = CurveThinner(most_rows_);
  return rows;
}

CurveCollector::CurveCollector(const Path& path, const Cell& cell, std::size_t values)
    : path_(path),
      limits_(rate_limits(cell, 0)),
      thinner_(std::max(least_rows, values / (2 * limits_.size() + 1 + columns_beside_values))) {
  curves_.arm = cell.arm;
  for (const Tool& tool : cell.tools) curves_.tools.push_back(tool.placement);
  curves_.tools.emplace_back();
  curves_.start_place = path.waypoints.front().place;
  for (auto w = path.waypoints.begin() + 1; w != path.waypoints.end(); ++w) {
    curves_.tool_of_segment.push_back(w->tool.value_or(static_cast<int>(cell.tools.size())));
  }
  curves_.waypoints.assign(path.waypoints.size(), Vector3::Constant(std::nan("")));
}

void CurveCollector::begin_segment(const SegmentStart& start) {
  const Waypoint& from = path_.waypoints.at(static_cast<std::size_t>(start.segment - 1));
  duration_ = start.duration;
  external_begin_ = external_values(from);
  external_change_ = external_values(path_.waypoints.at(static_cast<std::size_t>(start.segment)));
  for (std::size_t i = 0; i < external_change_.size(); ++i) external_change_[i] -= external_begin_[i];
  dwell(start.segment - 1);
}

/// The arm at rest at the end of a segment, if it arrived there.
void CurveCollector::dwell(int segment) {
  const double dwell = path_.waypoints.at(static_cast<std::size_t>(segment)).dwell;
  if (!(dwell > 0) || last_.segment != segment || last_.fraction != 1) return;
  add_still(last_.time);
  add_still(last_.time + dwell);
}

void CurveCollector::add_still(double time) {
  CurveRow row = last_;
  row.time = time;
  const auto speeds = row.values.begin() + static_cast<std::ptrdiff_t>(limits_.size());
  std::fill(speeds, row.values.end() - 1, 0.0);
  thinner_.add(std::move(row));
}

void CurveCollector::sample(const TraceSample& sample) {
  last_ = row_of(sample);
  const auto segment = static_cast<std::size_t>(sample.segment);
  if (sample.fraction == 0) curves_.waypoints.at(segment - 1) = sample.tcp.position;
  if (sample.fraction == 1) curves_.waypoints.at(segment) = sample.tcp.position;
  thinner_.add(last_);
}

void CurveCollector::extreme(const TraceSample& sample) {
  thinner_.add(row_of(sample));
}

CurveRow CurveCollector::row_of(const TraceSample& sample) const {
  CurveRow row{sample.segment, sample.fraction, sample.length, sample.time, {}, sample.tcp.position};
  row.values.reserve(2 * limits_.size() + 1);
  std::size_t external = 0;
  for (const RateLimit& limit : limits_) {
    const double position =
        limit.terms.empty() ? external_begin_.at(external) + sample.fraction * external_change_.at(external)
                            : limit.of(sample.joints);
    if (limit.terms.empty()) ++external;
    row.values.push_back(position);
  }
  external = 0;
  for (const RateLimit& limit : limits_) {
    double speed = 0;
    if (!limit.terms.empty()) {
      speed = limit.of(sample.speeds);
    } else if (duration_ > 0) {
      speed = external_change_.at(external) / duration_;
    }
    if (limit.terms.empty()) ++external;
    row.values.push_back(limit.speed ? speed / *limit.speed : 0.0);
  }
  row.values.push_back(sample.min_singular_value);
  return row;
}

PathCurves CurveCollector::take() {
  dwell(static_cast<int>(path_.waypoints.size()) - 1);
  curves_.rows = thinner_.take();
  return std::move(curves_);
}

}  // namespace pathvet
