#pragma once

#include <cstddef>
#include <map>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "pathvet/model/cell.hpp"
#include "pathvet/model/path.hpp"

namespace pathvet {

/// The bytes of a file; none if it can't be read.
[[nodiscard]] std::optional<std::string> read_text(const std::string& file);

/// Changes a path file's text where it is asked to and nowhere else: comments, layout, the order of
/// attributes, line ends and a byte order mark stay. Edits are collected and applied together by text().
class PathRewriter {
 public:
  /// A waypoint to be put before another one, whose settings (move, tool, frame, turn-rate, orientation) it
  /// takes over.
  struct Insertion {
    std::string suffix;                             ///< its id is that of the other one with this behind it
    std::map<std::string, std::string> attributes;  ///< in place of the other one's, or besides them
    Pose pose;                                      ///< in the other one's frame
    bool same_orientation = false;                  ///< spelt exactly as in the other one's pose
    std::optional<Vector3> via;                     ///< mm
    std::vector<std::optional<JointVector>> external;  ///< index as Cell::positioners; none: left out
  };

  /// Precondition: `text` is a path file that parse_path accepts.
  explicit PathRewriter(std::string text);

  /// An attribute's value as it stands in the text; `waypoint` counts from 0, -1 is the root.
  [[nodiscard]] std::optional<std::string> attribute(int waypoint, std::string_view name) const;
  /// `value` goes into the text as it is; a new attribute stands behind the others.
  void set_attribute(int waypoint, std::string_view name, const std::string& value);
  /// Precondition: the waypoint has a <via>.
  void set_via(int waypoint, const Vector3& position);
  /// A waypoint's taught configuration (rad or mm): in place of the one it has, or before its <pose>.
  void set_joints(int waypoint, const JointVector& joints, const Arm& arm);
  /// Several before one waypoint stand in the order of the calls.
  void insert_before(int waypoint, const Insertion& insertion, const Cell& cell);

  [[nodiscard]] std::string text() const;

 private:
  struct Places {
    std::size_t tag = 0;
    std::optional<std::size_t> pose, via, joints;
  };
  struct Edit {
    std::size_t offset = 0;
    std::size_t length = 0;  ///< of the bytes that are replaced
    std::string text;
  };
  struct Attribute {
    std::string name;
    std::size_t value = 0;  ///< offset of its first byte
    std::size_t length = 0;
    char quote = '"';
  };

  [[nodiscard]] std::vector<Attribute> attributes(std::size_t tag, std::size_t* end = nullptr) const;
  [[nodiscard]] std::string pose_text(const Places& places, const Insertion& insertion) const;
  [[nodiscard]] const Places& places(int waypoint) const;
  void set(std::size_t tag, std::string_view name, const std::string& value);

  std::string text_;
  bool has_byte_order_mark_ = false;
  Places root_;
  std::vector<Places> waypoints_;
  std::vector<Edit> edits_;
};

/// A number as it is written into a path file: at most 15 significant digits, so that it reads back as
/// written.
[[nodiscard]] std::string file_number(double value);

/// `value` (> 0) cut, never rounded up, to six significant digits: a speed that has to hold.
[[nodiscard]] std::string file_number_below(double value);

}  // namespace pathvet
