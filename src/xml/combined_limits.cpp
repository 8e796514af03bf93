#include "xml/combined_limits.hpp"

#include <fmt/format.h>

#include <algorithm>

#include "xml/joints.hpp"
#include "xml/names.hpp"

namespace pathvet::xml {
namespace {

std::string_view kind_of(JointType type) {
  return type == JointType::revolute ? "revolute" : "prismatic";
}

/// Nothing if the joint is unknown.
std::optional<CombinedLimit::Term> read_term(const Element& element, const std::vector<Joint>& joints) {
  element.expect({"joint", "factor"}, {});
  const auto factor = element.require_number("factor");
  if (factor == 0.0) element.fault_at("factor", "factor of <term> is 0; expected another number");
  const auto name = element.require("joint");
  if (!name) return std::nullopt;
  const auto joint = index_of(joints, *name);
  if (joint) return CombinedLimit::Term{*joint, factor.value_or(1)};
  element.fault_at("joint",
                   fmt::format("no joint {} in the arm; {}", in_quotes(*name), expected_name(joints)));
  return std::nullopt;
}

void check_term(const Element& element, const CombinedLimit::Term& term, const CombinedLimit& limit,
                const std::vector<Joint>& joints) {
  const auto same_joint = [&](const CombinedLimit::Term& other) { return other.joint == term.joint; };
  const std::string name = in_quotes(joints[static_cast<std::size_t>(term.joint)].name);
  if (std::any_of(limit.terms.begin(), limit.terms.end(), same_joint)) {
    element.fault_at("joint", fmt::format("a second <term> of the joint {}; expected one", name));
  }
  const JointType type = joints[static_cast<std::size_t>(term.joint)].type;
  if (!limit.terms.empty() && type != limit.type) {
    element.fault_at("joint", fmt::format("the joint {} is {}; expected a {} one like the first", name,
                                          kind_of(type), kind_of(limit.type)));
  }
}

void read_terms(const Element& element, CombinedLimit& limit, const std::vector<Joint>& joints) {
  const std::vector<Element> terms = element.children("term");
  if (terms.empty()) element.fault("<combined-limit> has no <term>; expected one at least");
  for (const Element& child : terms) {
    const auto term = read_term(child, joints);
    if (!term) continue;
    check_term(child, *term, limit, joints);
    if (limit.terms.empty()) limit.type = joints[static_cast<std::size_t>(term->joint)].type;
    limit.terms.push_back(*term);
  }
}

void read_bounds(const Element& element, CombinedLimit& limit) {
  if (element.has("lower") != element.has("upper")) {
    element.fault_at(element.has("lower") ? "lower" : "upper",
                     "<combined-limit> has one of lower and upper alone; expected both or neither");
  } else if (!element.has("lower") && !element.has("speed")) {
    element.fault("<combined-limit> bounds nothing; expected lower and upper, speed, or all three");
  }
  const Limits limits = read_limits(element);
  const auto scaled = [&](std::optional<double> value) {
    if (value) *value *= unit_of(limit.type);
    return value;
  };
  limit.lower = scaled(limits.lower);
  limit.upper = scaled(limits.upper);
  limit.speed = scaled(limits.speed);
}

CombinedLimit read_combined_limit(const Element& element, const std::vector<Joint>& joints) {
  element.expect({"name", "lower", "upper", "speed"}, {"term"});
  CombinedLimit limit;
  limit.name = element.require_name("name");
  read_terms(element, limit, joints);
  read_bounds(element, limit);
  return limit;
}

}  // namespace

std::vector<CombinedLimit> read_combined_limits(const Element& arm, const std::vector<Joint>& joints) {
  std::vector<CombinedLimit> limits;
  UniqueNames names;  // of joints too: in findings they stand in one place
  for (const Joint& joint : joints) names.take(joint.name);
  for (const Element& element : arm.children("combined-limit")) {
    limits.push_back(read_combined_limit(element, joints));
    names.check(element, "joint or combined limit");
  }
  return limits;
}

}  // namespace pathvet::xml
