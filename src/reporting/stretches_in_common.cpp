#include "reporting/stretches_in_common.hpp"

#include <algorithm>
#include <unordered_map>

namespace pathvet::reporting {
namespace {

std::vector<std::string> waypoints(const SavedPath& path) {
  std::vector<std::string> ids;
  if (!path.segments.empty()) ids.push_back(path.segments.front().from);
  for (const SavedSegment& segment : path.segments) ids.push_back(segment.to);
  return ids;
}

/// Indices of a longest strictly increasing run of `values`, left out the negative ones.
std::vector<std::size_t> longest_increasing(const std::vector<long>& values) {
  std::vector<std::size_t> ends;  // ends[k]: where the run of k + 1 values with the least end stands
  std::vector<long> previous(values.size(), -1);
  for (std::size_t i = 0; i < values.size(); ++i) {
    if (values[i] < 0) continue;
    const auto place =
        std::ranges::lower_bound(ends, values[i], {}, [&](std::size_t end) { return values[end]; });
    if (place != ends.begin()) previous[i] = static_cast<long>(*(place - 1));
    if (place == ends.end()) {
      ends.push_back(i);
    } else {
      *place = i;
    }
  }
  std::vector<std::size_t> run;
  for (long i = ends.empty() ? -1 : static_cast<long>(ends.back()); i >= 0;
       i = previous[static_cast<std::size_t>(i)]) {
    run.push_back(static_cast<std::size_t>(i));
  }
  std::ranges::reverse(run);
  return run;
}

/// `common`: the waypoints of this path that both have, in order. A segment belongs to the stretch that
/// begins at the last of them at or before its own begin; stretch 0 lies before the first.
std::vector<SegmentPlace> places(const SavedPath& path, const std::vector<std::size_t>& common) {
  std::vector<SegmentPlace> out(path.segments.size());
  std::vector<SegmentPlace> sums(common.size() + 1);
  std::size_t passed = 0;
  for (std::size_t i = 0; i < out.size(); ++i) {
    while (passed < common.size() && common[passed] <= i) ++passed;
    out[i].stretch = static_cast<int>(passed);
    SegmentPlace& sum = sums[passed];
    out[i].before_mm = sum.whole_mm;
    out[i].before_s = sum.whole_s;
    sum.whole_mm += path.segments[i].length_mm;
    sum.whole_s += path.segments[i].duration_s;
  }
  for (SegmentPlace& place : out) {
    place.whole_mm = sums[static_cast<std::size_t>(place.stretch)].whole_mm;
    place.whole_s = sums[static_cast<std::size_t>(place.stretch)].whole_s;
  }
  return out;
}

}  // namespace

SideBySide side_by_side(const SavedPath& before, const SavedPath& after) {
  const std::vector<std::string> old_ids = waypoints(before), new_ids = waypoints(after);
  std::unordered_map<std::string, long> where;
  for (std::size_t i = 0; i < new_ids.size(); ++i) where.emplace(new_ids[i], static_cast<long>(i));
  std::vector<long> values;
  for (const std::string& id : old_ids) {
    const auto found = where.find(id);
    values.push_back(found == where.end() ? -1 : found->second);
  }
  const std::vector<std::size_t> in_old = longest_increasing(values);
  std::vector<std::size_t> in_new;
  for (std::size_t i : in_old) in_new.push_back(static_cast<std::size_t>(values[i]));
  return {places(before, in_old), places(after, in_new), !in_old.empty()};
}

}  // namespace pathvet::reporting
