#include "reference/reference_file.hpp"

#include <charconv>
#include <fstream>
#include <stdexcept>

#include "pathvet/model/units.hpp"

namespace pathvet::test {
namespace {

[[noreturn]] void fail(const std::string& file, int line, const std::string& what) {
  throw std::runtime_error(file + ":" + std::to_string(line) + ": " + what);
}

std::vector<double> numbers_of(const ReferenceBlock& block, const std::string& text) {
  std::vector<double> values;
  const char* place = text.data();
  const char* const end = place + text.size();
  while (true) {
    while (place != end && *place == ' ') ++place;
    if (place == end) return values;
    double value = 0;
    const auto result = std::from_chars(place, end, value);
    if (result.ec != std::errc()) fail(block.file, block.line, "not a number in '" + text + "'");
    values.push_back(value);
    place = result.ptr;
  }
}

std::vector<double> expect_count(const ReferenceBlock& block, std::vector<double> values, std::size_t count) {
  if (values.size() != count)
    fail(block.file, block.line, "expected " + std::to_string(count) + " numbers in a line");
  return values;
}

Pose about_and_along_z(double degrees, double length) {
  return {Eigen::AngleAxisd(degrees * radians_per_degree, Vector3::UnitZ()).toRotationMatrix(),
          Vector3(0, 0, length)};
}

Pose about_and_along_x(double degrees, double length) {
  return {Eigen::AngleAxisd(degrees * radians_per_degree, Vector3::UnitX()).toRotationMatrix(),
          Vector3(length, 0, 0)};
}

void finish(std::vector<ReferenceBlock>& blocks, ReferenceBlock& block) {
  if (block.lines.empty()) return;
  for (const char* key : {"name", "source", "tolerance"}) static_cast<void>(block.text(key));
  blocks.push_back(block);
  block.lines.clear();
}

}  // namespace

const std::string& ReferenceBlock::text(const std::string& key) const {
  const auto found = lines.find(key);
  if (found == lines.end()) fail(file, line, "the block has no line '" + key + "'");
  if (found->second.size() != 1) fail(file, line, "the block has more than one line '" + key + "'");
  return found->second.front();
}

std::vector<double> ReferenceBlock::numbers(const std::string& key) const {
  return numbers_of(*this, text(key));
}

std::vector<std::vector<double>> ReferenceBlock::rows(const std::string& key) const {
  std::vector<std::vector<double>> values;
  const auto found = lines.find(key);
  if (found == lines.end()) return values;
  for (const std::string& row : found->second) values.push_back(numbers_of(*this, row));
  return values;
}

std::string ReferenceBlock::title() const {
  return file + ":" + std::to_string(line) + ": " + text("name") + " (" + text("source") + ")";
}

std::vector<ReferenceBlock> read_reference_file(const std::string& name) {
  std::ifstream input(std::string(PATHVET_SOURCE_DIR) + "/tests/reference/" + name);
  if (!input) fail(name, 1, "cannot be opened");
  std::vector<ReferenceBlock> blocks;
  ReferenceBlock block;
  block.file = name;
  std::string text;
  for (int line = 1; std::getline(input, text); ++line) {
    if (text.empty()) {
      finish(blocks, block);
      continue;
    }
    if (text.front() == '#') continue;
    const std::size_t colon = text.find(": ");
    if (colon == std::string::npos) fail(name, line, "expected 'key: value'");
    if (block.lines.empty()) block.line = line;
    block.lines[text.substr(0, colon)].push_back(text.substr(colon + 2));
  }
  finish(blocks, block);
  return blocks;
}

Arm reference_arm(const ReferenceBlock& block) {
  Arm arm;
  const auto add = [&arm](JointType type, const Pose& before, const Pose& after) {
    Joint joint;
    joint.type = type;
    joint.before = before;
    joint.after = after;
    arm.joints.push_back(joint);
  };
  for (const char* key : {"dh", "dh-prismatic"}) {
    for (const auto& row : block.rows(key)) {
      const auto v = expect_count(block, row, 4);
      add(std::string(key) == "dh" ? JointType::revolute : JointType::prismatic,
          about_and_along_z(v[0], v[1]), about_and_along_x(v[3], v[2]));
    }
  }
  for (const auto& row : block.rows("dh-proximal")) {
    const auto v = expect_count(block, row, 4);
    add(JointType::revolute, about_and_along_x(v[0], v[1]) * about_and_along_z(v[2], v[3]), Pose{});
  }
  for (const auto& row : block.rows("mount")) {
    const auto v = expect_count(block, row, 6);
    const Vector3 axis(v[3], v[4], v[5]);
    const Pose to_axis{Eigen::Quaterniond::FromTwoVectors(Vector3::UnitZ(), axis).toRotationMatrix(),
                       Vector3::Zero()};
    add(JointType::revolute, Pose{Matrix3::Identity(), Vector3(v[0], v[1], v[2])} * to_axis,
        to_axis.inverse());
  }
  if (block.has("base-roll-pitch-yaw")) {
    const auto v = expect_count(block, block.numbers("base-roll-pitch-yaw"), 3);
    arm.base.rotation = rotation_from_roll_pitch_yaw(v[0] * radians_per_degree, v[1] * radians_per_degree,
                                                     v[2] * radians_per_degree);
  }
  if (block.has("flange")) {
    const auto v = expect_count(block, block.numbers("flange"), 3);
    arm.flange.position = Vector3(v[0], v[1], v[2]);
  }
  return arm;
}

JointVector reference_joints(const ReferenceBlock& block, const Arm& arm) {
  const bool in_radians = block.has("joints-rad");
  const auto values =
      expect_count(block, block.numbers(in_radians ? "joints-rad" : "joints"), arm.joints.size());
  JointVector q(arm.joint_count());
  for (std::size_t i = 0; i < values.size(); ++i) {
    const bool degrees = !in_radians && arm.joints[i].type == JointType::revolute;
    q[static_cast<Eigen::Index>(i)] = values[i] * (degrees ? radians_per_degree : 1);
  }
  return q;
}

}  // namespace pathvet::test
