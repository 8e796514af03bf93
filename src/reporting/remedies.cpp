#include <fmt/format.h>

#include <cmath>

#include "pathvet/model/units.hpp"
#include "pathvet/reporting/messages.hpp"
#include "reporting/phrases.hpp"
#include "reporting/units.hpp"

namespace pathvet {
namespace {

using namespace reporting;

/// How far from the singularity the arm has to stay: the smallest singular value grows about in proportion to
/// the distance, which is good enough for advice as long as the factor is moderate.
std::optional<double> needed_nearness(const Finding& pass) {
  constexpr double greatest_factor = 50;
  constexpr double greatest_angle = 60 * radians_per_degree;
  if (!pass.singular || !pass.singular->nearness || !pass.value || !pass.limit || !(*pass.value > 0))
    return {};
  const double factor = *pass.limit / *pass.value;
  const double needed = std::abs(*pass.singular->nearness) * factor;
  const bool is_angle = pass.singular->nearness_quantity == Quantity::angle;
  if (!(factor > 1 && factor < greatest_factor) || (is_angle && needed > greatest_angle)) return {};
  return needed;
}

std::string keep_clear(const Finding& pass) {
  const std::optional<double> needed = needed_nearness(pass);
  const std::string distance = needed ? amount(*needed, pass.singular->nearness_quantity) : "";
  switch (pass.singular ? pass.singular->kind : SingularKind::general) {
    case SingularKind::wrist:
      return needed ? fmt::format("tilt the tool or move the work so that the wrist stays bent by about {}",
                                  distance)
                    : "tilt the tool or move the work so that the wrist stays bent";
    case SingularKind::elbow:
      return needed ? fmt::format(
                          "bring the path nearer to the base, or out of the folded elbow, until the elbow is "
                          "about {} from it",
                          distance)
                    : "bring the path nearer to the base, or out of the folded elbow";
    case SingularKind::shoulder:
      return needed
                 ? fmt::format(
                       "move the path sideways by about {}, so that the wrist centre stays {} from the first "
                       "axis",
                       amount(*needed - std::abs(*pass.singular->nearness), Quantity::length), distance)
                 : "move the path sideways, away from the first axis";
    case SingularKind::general:
      break;
  }
  return "lead the path around this place, or start from another branch";
}

std::string sentence(std::string text) {
  if (!text.empty() && text[0] >= 'a' && text[0] <= 'z') text[0] = static_cast<char>(text[0] - 'a' + 'A');
  return text + '.';
}

/// "Set speed to at most 52.3 mm/s (it is 120 mm/s)": the speed at which the finding vanishes.
std::string slow_down(const PathResult& path, const Finding& f) {
  const SegmentResult& segment = segment_of(path, f);
  if (!f.helpful_speed) return "";
  const double helpful = to_programmed_unit(segment, *f.helpful_speed);
  std::string text = fmt::format("set {} to at most {} {}", programmed_attribute(segment),
                                 plain_below(helpful), programmed_unit(segment));
  const bool is_line = segment.move != Move::joint && !segment.turn_on_the_spot;
  if (is_line && segment.duration > 0) {
    text += fmt::format(" (now {} {})", plain(segment.length / segment.duration), programmed_unit(segment));
  }
  return text;
}

std::string slower_or_clear(const PathResult& path, const Finding& f) {
  const Finding* pass = segment_of(path, f).move == Move::joint ? nullptr : singular_pass_at(path, f);
  const std::string slow = slow_down(path, f);
  if (slow.empty()) {
    if (pass) return "No speed holds here: " + keep_clear(*pass) + ".";
    return "No speed holds here: move the path away from the edge of the reach, or start from another "
           "branch.";
  }
  return sentence(pass ? slow + ", or " + keep_clear(*pass) : slow);
}

/// A shift by whole turns that would bring the joint's whole range over the path inside its limits; 0: none.
int turns_that_fit(const AxisResult& axis) {
  constexpr int most_turns = 4;
  if (axis.type != JointType::revolute || !axis.lower || !axis.upper) return 0;
  for (int turns = 1; turns <= most_turns; ++turns) {
    for (int shift : {turns, -turns}) {
      const double angle = shift * 2 * pi;
      if (axis.min + angle >= *axis.lower && axis.max + angle <= *axis.upper) return shift;
    }
  }
  return 0;
}

std::string inside_limits(const PathResult& path, const Finding& f) {
  const AxisResult& axis = axis_of(path, f);
  const bool is_joint = f.axis < path.joint_count;
  if (const int turns = is_joint ? turns_that_fit(axis) : 0; turns != 0) {
    return fmt::format("Start with {} {} {}: its whole range on this path then lies inside the limits.",
                       axis.name, counted(std::abs(turns), "whole turn"), turns > 0 ? "higher" : "lower");
  }
  if (segment_of(path, f).move == Move::joint) {
    return "Give this move a target inside the limits, or another configuration of the same pose (pathvet "
           "pose lists "
           "them).";
  }
  const double excess = std::abs(f.value.value_or(0) - f.limit.value_or(0));
  return fmt::format(
      "Start from another branch, or turn the tool or move the work so that {} gains at least {}.", axis.name,
      amount(excess, f.quantity));
}

std::string more_margin(const PathResult& path, const Finding& f) {
  const double missing = f.limit.value_or(0) - f.value.value_or(0);
  return fmt::format(
      "Fine if the real arm's limits are as in the cell file; for the full margin {} has to stay {} "
      "further inside: another branch, a tilted tool or moved work.",
      axis_name(path, f.axis), amount(missing, f.quantity));
}

std::string jump_remedy(const PathResult& path, const Finding& f) {
  const SegmentResult& segment = segment_of(path, f);
  const std::string place = segment.length > 0
                                ? fmt::format("{} mm after {}", plain(f.begin_length), segment.from)
                                : fmt::format("where {} is left", segment.from);
  std::string text = fmt::format(
      "Break the path {} and go to the new configuration by a joint move clear of the work, or start from "
      "another branch",
      f.begin == 0 ? "at " + segment.from : place);
  if (const Finding* pass = singular_pass_at(path, f)) text += ", or " + keep_clear(*pass);
  return text + '.';
}

std::string reach_remedy(const Finding& f) {
  const std::string miss = amount(f.value.value_or(0), f.quantity);
  if (f.quantity == Quantity::angle) {
    return fmt::format(
        "Tilt the tool by at least {} (orientation=\"axis\" if its turn about its own axis is free), or "
        "move the work.",
        miss);
  }
  return fmt::format(
      "Move the path or the work by at least {} into the reach, tilt the tool, or add a waypoint that "
      "leads around.",
      miss);
}

std::string mismatch_remedy(const PathResult& path, const Finding& f) {
  return fmt::format(
      "Teach {} again with the values it arrives with, or start so that the taught configuration is "
      "reached (another branch or whole turn), or reach it by a joint move.",
      segment_of(path, f).to);
}

}  // namespace

std::string remedy(const PathResult& path, const Finding& finding) {
  switch (finding.code) {
    case Code::arm_speed:
    case Code::joint_acceleration:
    case Code::joint_speed:
    case Code::speed_margin:
      return slower_or_clear(path, finding);
    case Code::branch_flip:
      return "If the new branch is not wanted, keep well clear of the singularity (a near miss makes the "
             "joints spin), "
             "or change over by a joint move; teach what follows in the new branch.";
    case Code::joint_jump:
      return jump_remedy(path, finding);
    case Code::joint_limit:
      return inside_limits(path, finding);
    case Code::limit_margin:
      return more_margin(path, finding);
    case Code::out_of_reach:
      return reach_remedy(finding);
    case Code::singular_pass:
      return sentence(keep_clear(finding) +
                      "; or make this a joint move if the line between does not matter");
    case Code::taught_mismatch:
      return mismatch_remedy(path, finding);
    case Code::unproven:
      return "Treat it as singular: lead the path around this place, or watch it closely at reduced speed.";
  }
  return "";
}

}  // namespace pathvet
