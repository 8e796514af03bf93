#include "xml/path_reader.hpp"

#include <fmt/format.h>

#include <filesystem>

#include "xml/external.hpp"
#include "xml/joints.hpp"
#include "xml/names.hpp"
#include "xml/placement.hpp"
#include "xml/segment_faults.hpp"
#include "xml/settings.hpp"

namespace pathvet::xml {
namespace {

/// Reads one waypoint after the other; some of what one says hangs on the one before.
class WaypointReader {
 public:
  WaypointReader(const Document& document, const Settings& defaults, const Cell* cell, std::size_t count)
      : places_(document.text()), defaults_(defaults), cell_(cell), external_(cell), ids_(count) {}

  Waypoint read(const Element& element);

 private:
  std::optional<Move> read_move(const Element& element) const;
  std::optional<JointVector> read_joint_list(const Element& waypoint) const;
  static std::optional<Pose> read_pose(const Element& waypoint);
  static std::optional<Vector3> read_via(const Element& waypoint, std::optional<Move> move);
  static void check_target(const Element& element, Move move, const Settings& settings);
  void check_segment(const Element& element, const Waypoint& waypoint, const Settings& settings) const;

  PlaceFinder places_;
  Settings defaults_;
  const Cell* cell_;
  External external_;
  UniqueNames ids_;
  std::optional<Waypoint> previous_;
  Settings previous_settings_;
};

std::optional<Move> WaypointReader::read_move(const Element& element) const {
  const auto move = element.find("move");
  if (!previous_) {
    if (move) element.fault_at("move", "the first waypoint is the start; expected no move there");
    return Move::start;
  }
  if (!move) {
    element.fault(
        "<waypoint> has no move; expected linear, circular or joint (the first waypoint alone has none)");
  } else if (move == "linear") {
    return Move::linear;
  } else if (move == "circular") {
    return Move::circular;
  } else if (move == "joint") {
    return Move::joint;
  } else {
    element.fault_at(
        "move", fmt::format("move {}; expected \"linear\", \"circular\" or \"joint\"", in_quotes(*move)));
  }
  return std::nullopt;
}

std::optional<JointVector> WaypointReader::read_joint_list(const Element& waypoint) const {
  const auto element = waypoint.child("joints");
  if (!element) return std::nullopt;
  element->expect({}, {}, Element::Text::numbers);
  const auto numbers = element->text_numbers();
  if (!numbers) return std::nullopt;
  if (cell_ == nullptr) {
    if (numbers->empty()) element->fault("<joints> is empty; expected one number for each joint");
    return std::nullopt;
  }
  const std::vector<Joint>& joints = cell_->arm.joints;
  if (numbers->size() == joints.size()) return joint_vector(*numbers, joints);
  element->fault_at_text(fmt::format("<joints> has {}; expected {}, one for each joint of the cell's arm",
                                     counted(numbers->size(), "number"), joints.size()));
  return std::nullopt;
}

std::optional<Pose> WaypointReader::read_pose(const Element& waypoint) {
  const auto element = waypoint.child("pose");
  if (!element) return std::nullopt;
  expect_placement(*element);
  return read_placement(*element);
}

std::optional<Vector3> WaypointReader::read_via(const Element& waypoint, std::optional<Move> move) {
  const auto element = waypoint.child("via");
  if (!element) {
    if (move == Move::circular) waypoint.fault("a circular move without <via>; expected a point of the arc");
    return std::nullopt;
  }
  if (move && move != Move::circular) element->fault("<via> belongs to a circular move alone");
  element->expect({"position"}, {});
  if (!element->require("position")) return std::nullopt;
  return read_vector(*element, "position");
}

/// That the waypoint says where to go, and how fast.
void WaypointReader::check_target(const Element& element, Move move, const Settings& settings) {
  const bool has_pose = !element.children("pose").empty();
  const bool has_joints = !element.children("joints").empty();
  const bool cartesian = move == Move::linear || move == Move::circular;
  const std::string_view name = move == Move::linear ? "linear" : "circular";
  if (cartesian && !has_pose) {
    element.fault(fmt::format("a {} move without <pose>; expected the pose where it ends", name));
  }
  if (!has_pose && !has_joints) {
    if (move == Move::start) element.fault("the start has neither <joints> nor <pose>; expected one or both");
    if (move == Move::joint) element.fault("a joint move without target; expected <joints> or <pose>");
  }
  if (cartesian && !settings.has_speed) {
    element.fault(
        fmt::format("a {} move without speed; expected the attribute speed (mm/s) here or at <path>", name));
  }
}

/// What is wrong with a Cartesian move whose two ends are known from the file alone: in one frame, of one
/// tool.
void WaypointReader::check_segment(const Element& element, const Waypoint& waypoint,
                                   const Settings& settings) const {
  if (!previous_ || !previous_->pose || !waypoint.pose) return;
  if (waypoint.move != Move::linear && waypoint.move != Move::circular) return;
  if (settings.tool_name != previous_settings_.tool_name) return;
  if (settings.frame_name != previous_settings_.frame_name) return;
  if (waypoint.via) {
    const auto problem = arc_problem(previous_->pose->position, *waypoint.via, waypoint.pose->position);
    if (problem) element.children("via").front().fault(*problem);
  }
  const bool full = waypoint.orientation == Orientation::full && previous_->orientation == Orientation::full;
  if (full && is_half_turn(previous_->pose->rotation, waypoint.pose->rotation)) {
    element.children("pose").front().fault(
        fmt::format("a turn of 180° from waypoint {} has no short way; add a waypoint between",
                    in_quotes(previous_->id)));
  }
}

Waypoint WaypointReader::read(const Element& element) {
  element.expect(
      {"id", "move", "tool", "frame", "speed", "turn-rate", "blend", "joint-rate", "orientation", "dwell"},
      {"joints", "pose", "via", "external"});
  const Settings settings = read_settings(element, defaults_, cell_);
  const std::optional<Move> move = read_move(element);
  Waypoint waypoint;
  waypoint.id = element.require_name("id");
  ids_.check(element, "waypoint", "id");
  waypoint.place = places_.at(element.offset());
  waypoint.move = move.value_or(Move::joint);
  waypoint.joints = read_joint_list(element);
  waypoint.pose = read_pose(element);
  waypoint.via = read_via(element, move);
  waypoint.tool = settings.tool;
  waypoint.frame = settings.frame;
  waypoint.orientation = settings.orientation;
  waypoint.speed = settings.speed;
  waypoint.turn_rate = settings.turn_rate;
  waypoint.joint_rate = settings.joint_rate;
  waypoint.blend = settings.blend;
  waypoint.dwell = element.number("dwell", Range::not_negative).value_or(0);
  waypoint.external = external_.read(element, !previous_);
  if (move) check_target(element, *move, settings);
  check_segment(element, waypoint, settings);
  previous_ = waypoint;
  previous_settings_ = settings;
  return waypoint;
}

}  // namespace

Path read_path(const Element& root, const Document& document, const Cell* cell) {
  root.expect({"version", "name", "cell", "tool", "frame", "speed", "turn-rate", "blend", "joint-rate",
               "orientation"},
              {"waypoint"});
  check_version(root);
  Path path;
  path.file = document.file();
  path.name = root.find("name").value_or("");
  path.cell_file = cell_file_of(root, document.file()).value_or("");
  if (root.require("cell") && path.cell_file.empty()) {
    root.fault_at("cell", "cell of <path> is empty; expected the name of a cell file");
  }
  const std::vector<Element> waypoints = root.children("waypoint");
  if (waypoints.size() < 2) {
    root.fault(fmt::format("<path> has {}; expected two at least", counted(waypoints.size(), "waypoint")));
  }
  WaypointReader reader(document, read_settings(root, Settings{}, cell), cell, waypoints.size());
  path.waypoints.reserve(waypoints.size());
  for (const Element& element : waypoints) path.waypoints.push_back(reader.read(element));
  return path;
}

std::optional<std::string> cell_file_of(const Element& root, const std::string& path_file) {
  const auto cell = root.find("cell");
  if (!cell || cell->empty()) return std::nullopt;
  return (std::filesystem::path(path_file).parent_path() / *cell).string();
}

}  // namespace pathvet::xml
