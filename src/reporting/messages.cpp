#include "pathvet/reporting/messages.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <array>
#include <cmath>

#include "pathvet/model/units.hpp"
#include "reporting/phrases.hpp"
#include "reporting/units.hpp"

namespace pathvet {
namespace {

using namespace reporting;

constexpr double least_runaway_share = 0.05;  // a joint with less of the motion isn't worth a word
constexpr std::size_t most_jumping_joints = 3;
constexpr double least_jump = 0.01;  // deg or mm; a smaller change isn't worth a word either

const char* verb(const AxisResult& axis) {
  return axis.type == JointType::revolute ? "turn" : "move";
}

std::string percent(double share) {
  return plain(100 * share, 3) + " %";
}

std::string out_of_limit(const PathResult& path, const Finding& f) {
  const AxisResult& axis = axis_of(path, f);
  const double value = f.value.value_or(0);
  const double limit = f.limit.value_or(0);
  const double excess = std::abs(value - limit);
  const bool is_hair = plain(to_user(excess, f.quantity)) == "0";
  const Compared texts = compared(value, limit, f.quantity);
  return fmt::format("{} comes to {}, {} beyond its {} limit of {}.", axis.name, texts.value,
                     is_hair ? "a hair" : amount(excess, f.quantity), value > limit ? "upper" : "lower",
                     texts.bound);
}

std::string near_to_limit(const PathResult& path, const Finding& f) {
  const NearLimit near = near_limit(path, f);
  const Compared texts = compared(f.value.value_or(0), f.limit.value_or(0), f.quantity);
  return fmt::format("{} comes within {} of its {} ({}); the margin asked for is {}.",
                     axis_name(path, f.axis), texts.value, near.side,
                     position_amount(axis_of(path, f), near.value), texts.bound);
}

std::string too_fast(const PathResult& path, const Finding& f) {
  const AxisResult& axis = axis_of(path, f);
  const double limit = std::abs(f.limit.value_or(0));
  if (f.unbounded || !f.value) {
    return fmt::format(
        "{} would have to {} at an unbounded rate: it grows without end towards an end of this "
        "stretch; {} can do {}.",
        axis.name, verb(axis), axis.name, amount(limit, f.quantity));
  }
  const Compared texts = compared(std::abs(*f.value), limit, f.quantity);
  return fmt::format("{} would have to {} {} {}; it can do {} ({}).", axis.name, verb(axis),
                     f.code == Code::joint_acceleration ? "with" : "at", texts.value, texts.bound,
                     percent(f.ratio));
}

std::string nearly_too_fast(const PathResult& path, const Finding& f) {
  const AxisResult& axis = axis_of(path, f);
  const Compared texts = compared(std::abs(f.value.value_or(0)), std::abs(f.limit.value_or(0)), f.quantity);
  return fmt::format("{} {}s at {}, {} of the {} that it can do.", axis.name, verb(axis), texts.value,
                     percent(f.ratio), texts.bound);
}

std::string nearness_words(const SingularDetail& singular) {
  if (!singular.nearness) return "";
  const std::string distance = amount(std::abs(*singular.nearness), singular.nearness_quantity);
  switch (singular.kind) {
    case SingularKind::wrist:
      return fmt::format(" The wrist is bent by only {}.", distance);
    case SingularKind::elbow:
      return fmt::format(" The elbow is {} from being stretched or folded.", distance);
    case SingularKind::shoulder:
      return fmt::format(" The wrist centre is {} from the first axis.", distance);
    case SingularKind::general:
      break;
  }
  return "";
}

/// The TCP's motion that the arm can't make there: turning or moving, whichever has the larger part.
std::string lost_motion_words(const Vector6& lost) {
  if (!(lost.norm() > 0)) return "";
  const bool is_turn = lost.tail<3>().squaredNorm() > lost.head<3>().squaredNorm();
  const Vector3 direction = (is_turn ? Vector3(lost.tail<3>()) : Vector3(lost.head<3>())).normalized();
  return fmt::format(" Hardly possible there: {} ({} {} {}) of the world.",
                     is_turn ? "turning about" : "moving along", fixed(direction.x(), 2),
                     fixed(direction.y(), 2), fixed(direction.z(), 2));
}

std::string singular(const PathResult& path, const Finding& f) {
  const Compared texts = compared(f.value.value_or(0), f.limit.value_or(0), Quantity::pure);
  if (!f.singular) {
    return fmt::format("Singularity: smallest singular value {} (threshold {}).", texts.value, texts.bound);
  }
  std::vector<std::string> joints;
  for (const Share& share : runaway_shares(f.singular->runaway, least_runaway_share)) {
    joints.push_back(axis_name(path, share.joint));
  }
  const std::string kind = f.singular->kind == SingularKind::general
                               ? std::string("Singularity")
                               : fmt::format("Singularity of the {}", name(f.singular->kind));
  const std::string runaway = joints.empty() ? ""
                                             : fmt::format(" {} {} fast there.", listed(joints),
                                                           joints.size() == 1 ? "becomes" : "become");
  return fmt::format("{}: smallest singular value {} (threshold {}).{}{}{}", kind, texts.value, texts.bound,
                     nearness_words(*f.singular), runaway, lost_motion_words(f.singular->lost_motion));
}

std::string flip(const Finding& f) {
  constexpr std::array<const char*, 3> factors = {"shoulder", "elbow", "wrist"};
  std::vector<std::string> changed;
  const bool named = f.from_branch.size() == factors.size() && f.to_branch.size() == factors.size();
  for (std::size_t i = 0; named && i < factors.size(); ++i) {
    if (f.from_branch[i] != f.to_branch[i]) changed.emplace_back(factors[i]);
  }
  return fmt::format(
      "The path leads exactly through a singularity{}; the arm goes on smoothly, but from branch {} to "
      "branch {}.",
      changed.empty() ? "" : " of the " + listed(changed), f.from_branch, f.to_branch);
}

std::string jump(const PathResult& path, const Finding& f) {
  struct Change {
    Eigen::Index joint;
    double share;
  };
  std::vector<Change> changes;
  for (Eigen::Index i = 0; i < std::min(f.from_joints.size(), f.to_joints.size()); ++i) {
    const AxisResult& axis = path.axes.at(static_cast<std::size_t>(i));
    const double share = std::abs(f.to_joints[i] - f.from_joints[i]) / axis.speed_limit.value_or(1);
    const Quantity quantity = position_quantity(axis.type);
    if (std::abs(to_user(f.to_joints[i] - f.from_joints[i], quantity)) < least_jump) continue;
    changes.push_back({i, share});
  }
  std::ranges::stable_sort(changes, std::greater<>(), &Change::share);
  std::vector<std::string> words;
  for (const Change& change : changes) {
    if (words.size() == most_jumping_joints) break;
    const AxisResult& axis = path.axes.at(static_cast<std::size_t>(change.joint));
    words.push_back(fmt::format("{} from {} to {}", axis.name,
                                plain(to_user(f.from_joints[change.joint], position_quantity(axis.type))),
                                position_amount(axis, f.to_joints[change.joint])));
  }
  if (words.empty()) return "No continuous joint motion follows the path here.";
  return fmt::format("No continuous joint motion follows the path here: the arm would have to jump, {}{}.",
                     listed(words), changes.size() > words.size() ? "; other joints by less" : "");
}

std::string unreachable(const Finding& f) {
  constexpr double noise = 1e-6;  // mm or rad; well below the tolerances of tracking
  const bool by_angle = f.quantity == Quantity::angle;
  std::string misses = fmt::format("the {} is missed by {}", by_angle ? "orientation" : "position",
                                   amount(f.value.value_or(0), f.quantity));
  const std::optional<double>& other = by_angle ? f.position_miss : f.orientation_miss;
  if (other && *other > noise) {
    misses += fmt::format(", the {} by {}", by_angle ? "position" : "orientation",
                          amount(*other, by_angle ? Quantity::length : Quantity::angle));
  }
  return fmt::format("No configuration reaches the pose: {}.", misses);
}

std::string mismatch(const PathResult& path, const Finding& f) {
  constexpr double turn_tolerance = 0.5 * radians_per_degree;  // the contract's for a taught configuration
  const AxisResult& axis = axis_of(path, f);
  const double value = f.value.value_or(0);
  const double turns = std::round(value / (2 * pi));
  const bool is_turn =
      f.quantity == Quantity::angle && turns != 0 && std::abs(value - turns * 2 * pi) < turn_tolerance;
  const std::string apart = is_turn ? counted(std::lround(std::abs(turns)), "whole turn") + " apart"
                                    : amount(std::abs(value), f.quantity) + " apart";
  if (f.axis >= f.joints.size()) return fmt::format("{} arrives {} from what is taught.", axis.name, apart);
  const double arrived = f.joints[f.axis];
  return fmt::format("{} arrives at {} where {} is taught: {}.", axis.name, position_amount(axis, arrived),
                     position_amount(axis, arrived - value), apart);
}

std::string arm_too_fast(const Finding& f) {
  const Compared texts = compared(f.value.value_or(0), f.limit.value_or(0), f.quantity);
  return fmt::format("{} moves at {}; asked for is at most {}.",
                     f.point.empty() ? "A point of the arm" : f.point, texts.value, texts.bound);
}

}  // namespace

std::string message(const PathResult& path, const Finding& finding) {
  switch (finding.code) {
    case Code::arm_speed:
      return arm_too_fast(finding);
    case Code::branch_flip:
      return flip(finding);
    case Code::joint_acceleration:
    case Code::joint_speed:
      return too_fast(path, finding);
    case Code::joint_jump:
      return jump(path, finding);
    case Code::joint_limit:
      return out_of_limit(path, finding);
    case Code::limit_margin:
      return near_to_limit(path, finding);
    case Code::out_of_reach:
      return unreachable(finding);
    case Code::singular_pass:
      return singular(path, finding);
    case Code::speed_margin:
      return nearly_too_fast(path, finding);
    case Code::taught_mismatch:
      return mismatch(path, finding);
    case Code::unproven:
      return "That the joints can follow here without a jump could not be proven; nothing worse was found.";
  }
  return "";
}

}  // namespace pathvet
