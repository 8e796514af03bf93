#include "pathvet/xml/rewrite.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <array>
#include <charconv>
#include <cmath>

#include "pathvet/model/units.hpp"
#include "xml/characters.hpp"
#include "xml/document.hpp"

namespace pathvet {
namespace {

constexpr std::string_view byte_order_mark = "\xEF\xBB\xBF";
constexpr std::array<std::string_view, 3> orientation_names = {"quaternion", "roll-pitch-yaw",
                                                               "rotation-vector"};
constexpr std::array<std::string_view, 5> inherited = {"move", "tool", "frame", "turn-rate", "orientation"};

std::string numbers(std::initializer_list<double> values) {
  std::string text;
  for (double value : values) text += (text.empty() ? "" : " ") + file_number(value);
  return text;
}

std::string position_text(const Vector3& p) {
  return numbers({p.x(), p.y(), p.z()});
}

/// Spelt as `spelling` says, where that has a value (roll-pitch-yaw has none that is well defined at a pitch
/// of 90°).
std::string orientation_text(const Matrix3& r, std::string_view spelling) {
  constexpr double degree = radians_per_degree;
  constexpr double least_cosine = 1e-6;
  const double cosine = std::hypot(r(0, 0), r(1, 0));
  if (spelling == "roll-pitch-yaw" && cosine > least_cosine) {
    return fmt::format("roll-pitch-yaw=\"{}\"",
                       numbers({std::atan2(r(2, 1), r(2, 2)) / degree, std::atan2(-r(2, 0), cosine) / degree,
                                std::atan2(r(1, 0), r(0, 0)) / degree}));
  }
  if (spelling == "rotation-vector") {
    const Vector3 v = rotation_vector(r) / degree;
    return fmt::format("rotation-vector=\"{}\"", position_text(v));
  }
  const Eigen::Quaterniond q = quaternion(r);
  return fmt::format("quaternion=\"{}\"", numbers({q.w(), q.x(), q.y(), q.z()}));
}

std::string external_text(const Cell& cell, std::size_t positioner, const JointVector& values) {
  const Positioner& p = cell.positioners[positioner];
  std::string text;
  for (std::size_t i = 0; i < p.joints.size(); ++i) {
    const double value = values[static_cast<Eigen::Index>(i)];
    const bool angle = p.joints[i].type == JointType::revolute;
    text += (i == 0 ? "" : " ") + file_number(angle ? value / radians_per_degree : value);
  }
  std::string name;
  for (char c : p.name)
    name += c == '&' ? "&amp;" : c == '<' ? "&lt;" : c == '"' ? "&quot;" : std::string(1, c);
  return fmt::format("<external positioner=\"{}\">{}</external> ", name, text);
}

}  // namespace

std::string file_number(double value) {
  constexpr double least = 1e-12;  // mm, deg: rounding noise beside a zero
  return fmt::format("{:.15g}", std::abs(value) < least ? 0.0 : value);
}

std::string file_number_below(double value) {
  constexpr int digits = 6;
  const int exponent = static_cast<int>(std::floor(std::log10(value)));
  const double unit = std::pow(10.0, exponent - digits + 1);
  for (double steps = std::floor(value / unit);; steps -= 1) {
    const std::string text = fmt::format("{:.{}g}", steps * unit, digits);
    double read = 0;
    std::from_chars(text.data(), text.data() + text.size(), read);
    if (read <= value) return text;
  }
}

std::optional<std::string> read_text(const std::string& file) {
  return xml::load_file(file).text;
}

PathRewriter::PathRewriter(std::string text) : text_(std::move(text)) {
  has_byte_order_mark_ = std::string_view(text_).starts_with(byte_order_mark);
  if (has_byte_order_mark_) text_.erase(0, byte_order_mark.size());
  xml::Document document(text_, "");
  const auto root = document.root("path");
  if (!root) return;
  root_.tag = root->offset();
  for (const xml::Element& element : root->children("waypoint")) {
    Places places;
    places.tag = element.offset();
    if (const auto pose = element.child("pose")) places.pose = pose->offset();
    if (const auto joints = element.child("joints")) places.joints = joints->offset();
    if (const auto via = element.child("via")) places.via = via->offset();
    waypoints_.push_back(places);
  }
}

const PathRewriter::Places& PathRewriter::places(int waypoint) const {
  return waypoint < 0 ? root_ : waypoints_.at(static_cast<std::size_t>(waypoint));
}

/// The attributes of the tag that begins at `tag`, and where its attributes end.
std::vector<PathRewriter::Attribute> PathRewriter::attributes(std::size_t tag, std::size_t* end) const {
  std::vector<Attribute> found;
  std::size_t at = tag + 1;
  while (!xml::is_space(text_[at]) && text_[at] != '>' && text_[at] != '/') ++at;
  std::size_t last = at;
  for (;;) {
    while (xml::is_space(text_[at])) ++at;
    if (text_[at] == '>' || text_[at] == '/') break;
    Attribute attribute;
    const std::size_t begin = at;
    while (!xml::is_space(text_[at]) && text_[at] != '=') ++at;
    attribute.name = text_.substr(begin, at - begin);
    at = text_.find_first_of("\"'", at);
    attribute.quote = text_[at];
    attribute.value = at + 1;
    at = text_.find(attribute.quote, at + 1);
    attribute.length = at - attribute.value;
    last = ++at;
    found.push_back(std::move(attribute));
  }
  if (end != nullptr) *end = last;
  return found;
}

std::optional<std::string> PathRewriter::attribute(int waypoint, std::string_view name) const {
  for (const Attribute& a : attributes(places(waypoint).tag)) {
    if (a.name == name) return text_.substr(a.value, a.length);
  }
  return std::nullopt;
}

void PathRewriter::set(std::size_t tag, std::string_view name, const std::string& value) {
  std::size_t end = 0;
  for (const Attribute& a : attributes(tag, &end)) {
    if (a.name != name) continue;
    if (text_.compare(a.value, a.length, value) != 0) edits_.push_back({a.value, a.length, value});
    return;
  }
  edits_.push_back({end, 0, fmt::format(" {}=\"{}\"", name, value)});
}

void PathRewriter::set_attribute(int waypoint, std::string_view name, const std::string& value) {
  set(places(waypoint).tag, name, value);
}

void PathRewriter::set_via(int waypoint, const Vector3& position) {
  set(places(waypoint).via.value(), "position", position_text(position));
}

void PathRewriter::set_joints(int waypoint, const JointVector& joints, const Arm& arm) {
  std::string values;
  for (int i = 0; i < arm.joint_count(); ++i) {
    const bool angular = arm.joints[static_cast<std::size_t>(i)].type == JointType::revolute;
    values += (i > 0 ? " " : "") + file_number(angular ? joints[i] * degrees_per_radian : joints[i]);
  }
  const Places& at = places(waypoint);
  if (!at.joints) {
    edits_.push_back({at.pose.value(), 0, "<joints>" + values + "</joints> "});
    return;
  }
  const std::size_t from = text_.find('>', *at.joints) + 1;
  edits_.push_back({from, text_.find("</joints", from) - from, values});
}

std::string PathRewriter::pose_text(const Places& at, const Insertion& insertion) const {
  std::string_view spelling = "quaternion";
  std::string verbatim;
  if (at.pose) {
    for (const Attribute& a : attributes(*at.pose)) {
      if (std::ranges::find(orientation_names, a.name) == orientation_names.end()) continue;
      spelling = *std::ranges::find(orientation_names, a.name);
      verbatim = fmt::format(" {}={}{}{}", a.name, a.quote, text_.substr(a.value, a.length), a.quote);
    }
  }
  const std::string orientation =
      insertion.same_orientation ? verbatim : " " + orientation_text(insertion.pose.rotation, spelling);
  return fmt::format("<pose position=\"{}\"{}/>", position_text(insertion.pose.position), orientation);
}

void PathRewriter::insert_before(int waypoint, const Insertion& insertion, const Cell& cell) {
  const Places& at = places(waypoint);
  std::string tag = "<waypoint";
  std::map<std::string, std::string> rest = insertion.attributes;
  for (const Attribute& a : attributes(at.tag)) {
    const std::string value = text_.substr(a.value, a.length);
    if (a.name == "id") {
      tag += fmt::format(" id={}{}{}{}", a.quote, value, insertion.suffix, a.quote);
    } else if (const auto own = rest.find(a.name); own != rest.end()) {
      tag += fmt::format(" {}=\"{}\"", a.name, own->second);
      rest.erase(own);
    } else if (std::ranges::find(inherited, a.name) != inherited.end()) {
      tag += fmt::format(" {}={}{}{}", a.name, a.quote, value, a.quote);
    }
  }
  for (const auto& [name, value] : rest) tag += fmt::format(" {}=\"{}\"", name, value);
  tag += "> ";
  for (std::size_t i = 0; i < insertion.external.size(); ++i) {
    if (insertion.external[i]) tag += external_text(cell, i, *insertion.external[i]);
  }
  if (insertion.via) tag += fmt::format("<via position=\"{}\"/> ", position_text(*insertion.via));
  tag += pose_text(at, insertion) + " </waypoint>";

  // On a line of its own with the same indent, if the other one begins its line.
  std::size_t line = at.tag;
  while (line > 0 && (text_[line - 1] == ' ' || text_[line - 1] == '\t')) --line;
  if (line == 0 || text_[line - 1] != '\n') {
    edits_.push_back({at.tag, 0, tag + " "});
    return;
  }
  const bool carriage_return = line > 1 && text_[line - 2] == '\r';
  edits_.push_back({line, 0, text_.substr(line, at.tag - line) + tag + (carriage_return ? "\r\n" : "\n")});
}

std::string PathRewriter::text() const {
  std::vector<Edit> sorted = edits_;
  std::ranges::stable_sort(sorted, {}, &Edit::offset);
  std::string out = has_byte_order_mark_ ? std::string(byte_order_mark) : std::string();
  std::size_t from = 0;
  for (const Edit& edit : sorted) {
    out.append(text_, from, edit.offset - from);
    out += edit.text;
    from = edit.offset + edit.length;
  }
  return out.append(text_, from);
}

}  // namespace pathvet
