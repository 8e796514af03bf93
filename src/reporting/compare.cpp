#include "pathvet/reporting/compare.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <limits>
#include <map>

#include "reporting/stretches_in_common.hpp"

namespace pathvet {
namespace {

using namespace reporting;

constexpr double worth_telling = 1e-3;  ///< relative change of a value
constexpr double moved_mm = 1;
constexpr double moved_share = 0.01;

/// How bad a finding is in the measure of its code; more is worse. The same for all where nothing is
/// measured.
double badness(const SavedFinding& f) {
  constexpr double without_bound = std::numeric_limits<double>::infinity();
  const double value = f.value.value_or(0);
  if (f.code == "joint-limit") return std::abs(value - f.limit.value_or(0));
  if (f.code == "limit-margin" || f.code == "singular-pass") return -value;
  if (f.code == "out-of-reach" || f.code == "taught-mismatch") return std::abs(value);
  const bool is_rate = f.code == "joint-speed" || f.code == "speed-margin" ||
                       f.code == "joint-acceleration" || f.code == "arm-speed";
  if (is_rate) return f.ratio.value_or(without_bound);
  return 0;
}

/// A finding with its place on a stretch that both paths have; several that go on across waypoints are one.
struct Placed {
  SavedFinding finding;  ///< the worst one
  double begin_mm = 0, end_mm = 0, begin_share = 0, end_share = 0;
  bool has_length = false;
  int last_segment = 0;
  double last_end = 0;  ///< fraction of that segment
};

Placed placed(const SavedFinding& f, const SegmentPlace& place) {
  Placed out{
      f,    place.before_mm + f.begin_mm, place.before_mm + f.end_mm, 0, 0, place.whole_mm > 0, f.segment,
      f.end};
  if (place.whole_s > 0) {
    out.begin_share = (place.before_s + f.begin_s) / place.whole_s;
    out.end_share = (place.before_s + f.end_s) / place.whole_s;
  }
  return out;
}

bool goes_on(const Placed& first, const SavedFinding& second) {
  constexpr double touching = 1e-6;
  return second.segment == first.last_segment + 1 && first.last_end > 1 - touching && second.begin < touching;
}

void take_in(Placed& first, const Placed& second) {
  if (badness(second.finding) > badness(first.finding)) first.finding = second.finding;
  first.end_mm = second.end_mm;
  first.end_share = second.end_share;
  first.last_segment = second.last_segment;
  first.last_end = second.last_end;
}

struct Key {
  int stretch;
  std::string code, joint;
  auto operator<=>(const Key&) const = default;
};
using Groups = std::map<Key, std::vector<Placed>>;

Groups groups(const SavedPath& path, const std::vector<SegmentPlace>& places) {
  Groups out;
  for (const SavedFinding& f : path.findings) {
    const SegmentPlace& place = places.at(static_cast<std::size_t>(f.segment) - 1);
    std::vector<Placed>& group = out[{place.stretch, f.code, f.joint}];
    const Placed one = placed(f, place);
    const auto before = std::ranges::find_if(group, [&f](const Placed& known) { return goes_on(known, f); });
    if (before == group.end()) {
      group.push_back(one);
    } else {
      take_in(*before, one);
    }
  }
  return out;
}

double distance(const Placed& a, const Placed& b) {
  if (a.has_length && b.has_length) {
    return std::max(std::abs(a.begin_mm - b.begin_mm), std::abs(a.end_mm - b.end_mm)) / moved_mm;
  }
  return std::max(std::abs(a.begin_share - b.begin_share), std::abs(a.end_share - b.end_share)) / moved_share;
}

Change change(const Placed& before, const Placed& after) {
  const double was = badness(before.finding), is = badness(after.finding);
  // Two that are both without bound are alike.
  if (was != is) {
    const double enough =
        std::isfinite(was) && std::isfinite(is) ? worth_telling * std::max(std::abs(was), std::abs(is)) : 0;
    if (is > was + enough) return Change::worse;
    if (is < was - enough) return Change::better;
  }
  return distance(before, after) > 1 ? Change::moved : Change::unchanged;
}

/// Of one code and joint on one stretch: the nearest two are the same finding, again and again.
void match(const std::string& file, std::vector<Placed> before, std::vector<Placed> after,
           std::vector<ComparedFinding>& out) {
  while (!before.empty() && !after.empty()) {
    std::size_t best_before = 0, best_after = 0;
    double least = std::numeric_limits<double>::infinity();
    for (std::size_t i = 0; i < before.size(); ++i) {
      for (std::size_t j = 0; j < after.size(); ++j) {
        const double far = distance(before[i], after[j]);
        if (far >= least) continue;
        least = far;
        best_before = i;
        best_after = j;
      }
    }
    const Placed& was = before[best_before];
    const Placed& is = after[best_after];
    out.push_back({change(was, is), file, was.finding, is.finding});
    before.erase(before.begin() + static_cast<std::ptrdiff_t>(best_before));
    after.erase(after.begin() + static_cast<std::ptrdiff_t>(best_after));
  }
  for (const Placed& gone : before) out.push_back({Change::fixed, file, gone.finding, std::nullopt});
  for (const Placed& come : after) out.push_back({Change::added, file, std::nullopt, come.finding});
}

void compare_paths(const SavedPath& before, const SavedPath& after, std::vector<ComparedFinding>& out) {
  const SideBySide both = side_by_side(before, after);
  Groups old_groups = groups(before, both.before);
  Groups new_groups = groups(after, both.after);
  if (both.has_common_waypoint) {
    for (auto& [key, known] : old_groups) {
      std::vector<Placed>& come = new_groups[key];
      match(after.file, std::move(known), std::move(come), out);
      new_groups.erase(key);
    }
  } else {
    for (auto& [key, known] : old_groups) match(after.file, std::move(known), {}, out);
  }
  for (auto& [key, come] : new_groups) match(after.file, {}, std::move(come), out);
}

/// For each path of `after` the one of `before` that it was; null: none.
std::vector<const SavedPath*> partners(const SavedReport& before, const SavedReport& after) {
  std::vector<const SavedPath*> out(after.paths.size(), nullptr);
  if (before.paths.size() == 1 && after.paths.size() == 1) return {&before.paths.front()};
  for (auto member : {&SavedPath::file, &SavedPath::name}) {
    for (std::size_t i = 0; i < out.size(); ++i) {
      if (out[i]) continue;
      for (const SavedPath& path : before.paths) {
        if (path.*member != after.paths[i].*member || std::ranges::find(out, &path) != out.end()) continue;
        out[i] = &path;
        break;
      }
    }
  }
  return out;
}

/// Settings of `one` that `other` doesn't have alike.
void add_settings(const SavedReport& one, const SavedReport& other, const char* word,
                  std::vector<std::string>& out) {
  for (const std::string& setting : one.settings) {
    if (std::ranges::find(other.settings, setting) == other.settings.end()) {
      out.push_back(fmt::format("{} was checked with {}", word, setting));
    }
  }
}

}  // namespace

const char* name(Change change) {
  constexpr std::array names = {"new", "worse", "moved", "better", "fixed", "unchanged"};
  return names.at(static_cast<std::size_t>(change));
}

int Comparison::count(Change change) const {
  return static_cast<int>(std::ranges::count(findings, change, &ComparedFinding::change));
}

Comparison compare_reports(const SavedReport& before, const SavedReport& after) {
  Comparison out{before.file, after.file, before.verdict, after.verdict, {}, {}};
  add_settings(before, after, "the older report", out.settings);
  add_settings(after, before, "the newer report", out.settings);
  const std::vector<const SavedPath*> known = partners(before, after);
  for (std::size_t i = 0; i < after.paths.size(); ++i) {
    compare_paths(known[i] ? *known[i] : SavedPath{}, after.paths[i], out.findings);
  }
  for (const SavedPath& path : before.paths) {
    if (std::ranges::find(known, &path) != known.end()) continue;
    for (const SavedFinding& f : path.findings) {
      out.findings.push_back({Change::fixed, path.file, f, std::nullopt});
    }
  }
  std::ranges::stable_sort(out.findings, {}, &ComparedFinding::change);
  return out;
}

}  // namespace pathvet
