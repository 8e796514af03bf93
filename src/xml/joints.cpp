#include "xml/joints.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <limits>

#include "pathvet/model/units.hpp"
#include "xml/names.hpp"
#include "xml/placement.hpp"

namespace pathvet::xml {
namespace {

constexpr double infinity = std::numeric_limits<double>::infinity();

struct DenavitHartenberg {
  double theta = 0;  // deg
  double d = 0;
  double a = 0;
  double alpha = 0;  // deg
};

DenavitHartenberg read_row(const Element& link) {
  link.expect({"theta", "d", "a", "alpha"}, {});
  const auto number = [&](const char* name) { return link.require_number(name).value_or(0); };
  return {number("theta"), number("d"), number("a"), number("alpha")};
}

Pose about_z(const DenavitHartenberg& row) {
  return {rotation_z(row.theta), {0, 0, row.d}};
}

Pose about_x(const DenavitHartenberg& row) {
  return {rotation_x(row.alpha), {row.a, 0, 0}};
}

/// The length of the vector from `at_zero` on along `direction`, at the joint value in the limits where it is
/// greatest (the square is convex in it, so at one of them).
double greatest_length(const Joint& joint, const Vector3& at_zero, const Vector3& direction) {
  if (joint.type == JointType::revolute) return at_zero.stableNorm();
  return std::max((at_zero + joint.lower * direction).stableNorm(),
                  (at_zero + joint.upper * direction).stableNorm());
}

void read_dh(const Element& link, Joint& joint) {
  const DenavitHartenberg row = read_row(link);
  joint.before = about_z(row);
  joint.after = about_x(row);
  joint.link_length = greatest_length(joint, {row.a, 0, row.d}, Vector3::UnitZ());
}

void read_dh_proximal(const Element& link, Joint& joint) {
  const DenavitHartenberg row = read_row(link);
  joint.before = about_x(row) * about_z(row);
  joint.after = Pose{};
  joint.link_length = greatest_length(joint, {row.a, 0, row.d}, Vector3::UnitZ());
}

void read_mount(const Element& link, Joint& joint) {
  expect_placement(link, {"axis"});
  const Pose placement = read_placement(link).value_or(Pose{});
  if (!link.require("axis")) return;
  const auto axis = read_vector(link, "axis");
  if (!axis) return;
  const double length = axis->stableNorm();
  if (length == 0) {
    link.fault_at("axis", "axis of <mount> is zero; expected a direction");
    return;
  }
  const Pose turn{rotation_from_z_to(*axis / length), Vector3::Zero()};
  joint.before = placement * turn;
  joint.after = turn.inverse();
  joint.link_length = greatest_length(joint, placement.position, joint.before.rotation.col(2));
}

void read_link(const Element& element, Joint& joint) {
  constexpr std::string_view expected = "expected one of <dh>, <dh-proximal> or <mount>";
  int links = 0;
  const auto read = [&](const char* name, auto reader) {
    for (const Element& link : element.children(name)) {
      if (++links == 2) link.fault(fmt::format("a second link of one joint; {}", expected));
      reader(link, joint);
    }
  };
  read("dh", read_dh);
  read("dh-proximal", read_dh_proximal);
  read("mount", read_mount);
  if (links == 0) element.fault(fmt::format("<joint> has no link; {}", expected));
}

JointType read_type(const Element& element) {
  const auto type = element.require("type");
  if (type == "prismatic") return JointType::prismatic;
  if (type && type != "revolute") {
    element.fault_at(
        "type", fmt::format("type {} of <joint>; expected \"revolute\" or \"prismatic\"", in_quotes(*type)));
  }
  return JointType::revolute;
}

bool read_continuous(const Element& element, JointType type) {
  const auto continuous = element.find("continuous");
  if (!continuous || continuous == "false") return false;
  if (continuous != "true") {
    element.fault_at("continuous", fmt::format("continuous={} of <joint>; expected \"true\" or \"false\"",
                                               in_quotes(*continuous)));
    return false;
  }
  if (type == JointType::prismatic) {
    element.fault_at("continuous", "a prismatic joint cannot be continuous; expected lower and upper");
  }
  return true;
}

void read_motion(const Element& element, Joint& joint) {
  const double unit = unit_of(joint.type);
  const Limits limits = read_limits(element);
  if (joint.continuous) {
    for (const char* name : {"lower", "upper"}) {
      if (!element.has(name)) continue;
      element.fault_at(name, fmt::format("{} of a continuous joint; expected neither lower nor upper", name));
    }
  } else {
    for (const char* name : {"lower", "upper"}) static_cast<void>(element.require(name));
  }
  static_cast<void>(element.require("speed"));
  joint.lower = joint.continuous ? -infinity : limits.lower.value_or(0) * unit;
  joint.upper = joint.continuous ? infinity : limits.upper.value_or(0) * unit;
  joint.speed = limits.speed.value_or(0) * unit;
  joint.acceleration = element.number("acceleration", Range::positive);
  if (joint.acceleration) *joint.acceleration *= unit;
}

Joint read_joint(const Element& element) {
  element.expect({"name", "type", "lower", "upper", "continuous", "speed", "acceleration"},
                 {"dh", "dh-proximal", "mount"});
  Joint joint;
  joint.name = element.require_name("name");
  joint.type = read_type(element);
  joint.continuous = read_continuous(element, joint.type);
  read_motion(element, joint);
  read_link(element, joint);
  return joint;
}

}  // namespace

double unit_of(JointType type) {
  return type == JointType::revolute ? radians_per_degree : 1.0;
}

JointVector joint_vector(const std::vector<double>& numbers, const std::vector<Joint>& joints) {
  JointVector values(static_cast<Eigen::Index>(joints.size()));
  for (std::size_t i = 0; i < joints.size(); ++i) {
    values[static_cast<Eigen::Index>(i)] = numbers[i] * unit_of(joints[i].type);
  }
  return values;
}

Limits read_limits(const Element& element) {
  const Limits limits{element.number("lower"), element.number("upper"),
                      element.number("speed", Range::positive)};
  if (limits.lower && limits.upper && *limits.lower >= *limits.upper) {
    element.fault_at("lower", fmt::format("lower {:g} of <{}> is not below upper {:g}", *limits.lower,
                                          element.name(), *limits.upper));
  }
  return limits;
}

std::vector<Joint> read_joints(const Element& chain) {
  const std::vector<Element> elements = chain.children("joint");
  std::vector<Joint> joints;
  UniqueNames names;
  for (const Element& element : elements) {
    if (joints.size() == max_joints) {
      element.fault(
          fmt::format("joint {} of <{}>; expected at most {}", max_joints + 1, chain.name(), max_joints));
      break;
    }
    joints.push_back(read_joint(element));
    names.check(element, "joint");
  }
  if (elements.empty())
    chain.fault(fmt::format("<{}> has no <joint>; expected 1 to {}", chain.name(), max_joints));
  return joints;
}

}  // namespace pathvet::xml
