#include "xml/cell_reader.hpp"

#include <fmt/format.h>

#include "xml/combined_limits.hpp"
#include "xml/joints.hpp"
#include "xml/names.hpp"
#include "xml/placement.hpp"

namespace pathvet::xml {
namespace {

/// The placement of a child that may be left out.
Pose read_part(const Element& parent, const char* name) {
  const std::optional<Element> part = parent.child(name);
  if (!part) return {};
  expect_placement(*part);
  return read_placement(*part).value_or(Pose{});
}

/// Half the sum of the lengths of the links, the flange included (contract, section 6).
double default_characteristic_length(const Arm& arm) {
  double sum = arm.flange.position.stableNorm();
  for (const Joint& joint : arm.joints) sum += joint.link_length;
  return sum / 2;
}

Arm read_arm(const Element& element, const FaultList& faults) {
  const std::size_t faults_before = faults.count();
  element.expect({"name", "characteristic-length"}, {"base", "joint", "flange", "combined-limit"});
  Arm arm;
  arm.name = element.find("name").value_or("");
  arm.base = read_part(element, "base");
  arm.joints = read_joints(element);
  arm.flange = read_part(element, "flange");
  arm.combined_limits = read_combined_limits(element, arm.joints);
  const auto length = element.number("characteristic-length", Range::positive);
  arm.characteristic_length = length ? *length : default_characteristic_length(arm);
  if (faults.count() == faults_before && arm.characteristic_length <= 0) {
    element.fault("no link of <arm> has a length; expected the attribute characteristic-length (mm)");
  }
  return arm;
}

Positioner read_positioner(const Element& element) {
  element.expect({"name"}, {"base", "joint", "flange"});
  Positioner positioner;
  positioner.name = element.require_name("name");
  positioner.base = read_part(element, "base");
  positioner.joints = read_joints(element);
  positioner.flange = read_part(element, "flange");
  return positioner;
}

Tool read_tool(const Element& element) {
  expect_placement(element, {"name", "carried-by"});
  if (element.has("carried-by")) {
    element.fault_at("carried-by",
                     "a tool that a positioner carries is not supported; expected carried-by at a <frame>");
  }
  return {element.require_name("name"), read_placement(element).value_or(Pose{})};
}

std::optional<int> read_carrier(const Element& element, const std::vector<Positioner>& positioners) {
  const auto name = element.find("carried-by");
  if (!name) return std::nullopt;
  const auto index = index_of(positioners, *name);
  if (index) return index;
  element.fault_at("carried-by", fmt::format("no positioner {} in the cell; {}", in_quotes(*name),
                                             expected_name(positioners)));
  return std::nullopt;
}

Frame read_frame(const Element& element, const std::vector<Positioner>& positioners) {
  expect_placement(element, {"name", "carried-by"});
  return {element.require_name("name"), read_placement(element).value_or(Pose{}),
          read_carrier(element, positioners)};
}

template <typename Part, typename Reader>
std::vector<Part> read_named(const Element& cell, const char* kind, Reader reader) {
  std::vector<Part> parts;
  UniqueNames names;
  for (const Element& element : cell.children(kind)) {
    parts.push_back(reader(element));
    names.check(element, kind);
  }
  return parts;
}

std::optional<JointVector> read_home(const Element& cell, const Arm& arm) {
  const std::optional<Element> home = cell.child("home");
  if (!home) return std::nullopt;
  home->expect({"joints"}, {});
  if (!home->require("joints")) return std::nullopt;
  const auto values = home->numbers("joints", arm.joints.size());
  if (!values) return std::nullopt;
  return joint_vector(*values, arm.joints);
}

Cell read_root(const Element& root, const FaultList& faults) {
  root.expect({"version", "name"}, {"arm", "tool", "frame", "positioner", "home"});
  check_version(root);
  Cell cell;
  cell.name = root.find("name").value_or("");
  cell.positioners = read_named<Positioner>(root, "positioner", read_positioner);
  const std::optional<Element> arm = root.child("arm");
  if (arm) cell.arm = read_arm(*arm, faults);
  if (!arm) root.fault("<cell> has no <arm>; expected one");
  cell.tools = read_named<Tool>(root, "tool", read_tool);
  cell.frames = read_named<Frame>(root, "frame",
                                  [&](const Element& frame) { return read_frame(frame, cell.positioners); });
  if (arm && !cell.arm.joints.empty()) cell.home = read_home(root, cell.arm);
  return cell;
}

}  // namespace

std::optional<Cell> read_cell(Document& document) {
  const std::optional<Element> root = document.root("cell");
  if (!root) return std::nullopt;
  Cell cell = read_root(*root, document.faults());
  if (document.faults().count() > 0) return std::nullopt;
  cell.file = document.file();
  return cell;
}

}  // namespace pathvet::xml
