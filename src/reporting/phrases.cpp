#include "reporting/phrases.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "reporting/units.hpp"

namespace pathvet::reporting {

const SegmentResult& segment_of(const PathResult& path, const Finding& finding) {
  return path.segments.at(static_cast<std::size_t>(finding.segment - 1));
}

const AxisResult& axis_of(const PathResult& path, const Finding& finding) {
  return path.axes.at(static_cast<std::size_t>(finding.axis));
}

std::string axis_name(const PathResult& path, int axis) {
  return axis < 0 ? std::string() : path.axes.at(static_cast<std::size_t>(axis)).name;
}

std::string position_amount(const AxisResult& axis, double value) {
  return amount(value, position_quantity(axis.type));
}

NearLimit near_limit(const PathResult& path, const Finding& finding) {
  const AxisResult& axis = axis_of(path, finding);
  // A combined limit's own value at the peak isn't kept; its range over the path tells the side.
  const bool is_joint = finding.axis < finding.joints.size();
  const double highest = is_joint ? finding.joints[finding.axis] : axis.max;
  const double lowest = is_joint ? finding.joints[finding.axis] : axis.min;
  const double above = axis.upper ? std::abs(*axis.upper - highest) : HUGE_VAL;
  const double below = axis.lower ? std::abs(lowest - *axis.lower) : HUGE_VAL;
  return above <= below ? NearLimit{"upper limit", axis.upper.value_or(0)}
                        : NearLimit{"lower limit", axis.lower.value_or(0)};
}

double to_programmed_unit(const SegmentResult& segment, double value) {
  if (segment.move == Move::joint) return 100 * value;
  return to_user(value, segment.turn_on_the_spot ? Quantity::angular_speed : Quantity::linear_speed);
}

const char* programmed_unit(const SegmentResult& segment) {
  if (segment.move == Move::joint) return "%";
  return unit(segment.turn_on_the_spot ? Quantity::angular_speed : Quantity::linear_speed);
}

const char* programmed_attribute(const SegmentResult& segment) {
  if (segment.move == Move::joint) return "joint-rate";
  return segment.turn_on_the_spot ? "turn-rate" : "speed";
}

std::vector<Share> runaway_shares(const JointVector& runaway, double least) {
  std::vector<Share> shares;
  const double whole = runaway.squaredNorm();
  if (!(whole > 0)) return shares;
  for (int i = 0; i < runaway.size(); ++i) {
    const double share = runaway[i] * runaway[i] / whole;
    if (share >= least) shares.push_back({i, share});
  }
  std::ranges::stable_sort(shares, std::greater<>(), &Share::share);
  return shares;
}

const Finding* singular_pass_at(const PathResult& path, const Finding& finding) {
  const auto overlaps = [&finding](const Finding& other) {
    return other.code == Code::singular_pass && other.segment == finding.segment && other.singular &&
           other.begin <= finding.end && finding.begin <= other.end;
  };
  const auto found = std::ranges::find_if(path.findings, overlaps);
  return found == path.findings.end() ? nullptr : &*found;
}

std::string listed(const std::vector<std::string>& words) {
  std::string text;
  for (std::size_t i = 0; i < words.size(); ++i) {
    if (i > 0) text += i + 1 == words.size() ? " and " : ", ";
    text += words[i];
  }
  return text;
}

std::string counted(long count, std::string_view word) {
  return fmt::format("{} {}{}", count, word, count == 1 ? "" : "s");
}

}  // namespace pathvet::reporting
