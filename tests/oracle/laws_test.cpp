#include "laws.hpp"

#include <doctest/doctest.h>

#include <algorithm>
#include <cmath>

// What a check must keep when its path is looked at in another way. Every law runs on random arms and paths.

namespace pathvet::test {
namespace {

constexpr int paths = 105;  // of each law

PathResult result_of(const RandomCase& c, const CheckOptions& options = {}) {
  Reading<PathResult> reading = check_path(c.path, c.cell, options);
  REQUIRE(reading.value);
  return std::move(*reading.value);
}

bool has(const PathResult& result, std::initializer_list<Code> codes) {
  return std::any_of(result.findings.begin(), result.findings.end(), [&](const Finding& f) {
    return std::find(codes.begin(), codes.end(), f.code) != codes.end();
  });
}

/// Runs a law on its paths; `other` makes the other view of a case and says what to expect of it.
template <typename Other>
void law(const char* title, Other other) {
  Random random(title);
  int compared = 0;
  for (int i = 0; compared < paths; ++i) {
    RandomCase c = law_case(random, i);
    const PathResult before = result_of(c);
    std::vector<Mark> expected;
    CheckOptions options;
    if (!other(random, c, before, options, expected)) continue;
    ++compared;
    const PathResult after = result_of(c, options);
    for (const std::string& difference : differences(expected, marks_of(after), after))
      FAIL_CHECK("case ", i, ": ", difference);
  }
  MESSAGE(compared, " paths");
}

}  // namespace

TEST_CASE("steps ten times finer change nothing") {
  law("finer steps",
      [](Random&, RandomCase&, const PathResult& before, CheckOptions& options, std::vector<Mark>& e) {
        options.step_length /= 10;
        options.step_angle /= 10;
        e = marks_of(before);
        return true;
      });
}

TEST_CASE("a cell moved as a whole changes nothing") {
  law("moved cell",
      [](Random& random, RandomCase& c, const PathResult& before, CheckOptions&, std::vector<Mark>& e) {
        const Pose move = random_pose(random, 3000);
        c.cell.arm.base = move * c.cell.arm.base;
        for (Frame& frame : c.cell.frames) frame.placement = move * frame.placement;
        for (Waypoint& w : c.path.waypoints) {
          if (w.pose && !w.frame) w.pose = move * *w.pose;
        }
        e = marks_of(before);
        // A jump between solutions that are equally near is decided by rounding.
        return !has(before, {Code::joint_jump, Code::out_of_reach});
      });
}

TEST_CASE("all lengths scaled alike change nothing but lengths") {
  law("scaled lengths", [](Random& random, RandomCase& c, const PathResult& before, CheckOptions& o,
                           std::vector<Mark>& e) {
    const double k = std::exp(random.uniform(-1, 1));
    const auto scale = [k](Pose& pose) { pose.position *= k; };
    for (Joint& joint : c.cell.arm.joints) {
      scale(joint.before);
      scale(joint.after);
      if (joint.type != JointType::prismatic) continue;
      joint.lower *= k;
      joint.upper *= k;
      joint.speed *= k;
    }
    scale(c.cell.arm.base);
    scale(c.cell.arm.flange);
    c.cell.arm.characteristic_length *= k;
    for (Tool& tool : c.cell.tools) scale(tool.placement);
    for (Frame& frame : c.cell.frames) scale(frame.placement);
    for (Waypoint& w : c.path.waypoints) {
      w.speed *= k;
      if (w.pose) scale(*w.pose);
      for (int i = 0; w.joints && i < w.joints->size(); ++i) {
        if (c.cell.arm.joints[static_cast<std::size_t>(i)].type == JointType::prismatic) (*w.joints)[i] *= k;
      }
    }
    o.step_length *= k;
    o.limit_margin_length *= k;
    e = marks_of(before);
    for (Mark& m : e) {
      const bool slides = m.axis >= 0 && m.axis < c.cell.arm.joint_count() &&
                          c.cell.arm.joints[static_cast<std::size_t>(m.axis)].type == JointType::prismatic;
      if (slides) m.value *= k;
    }
    return !has(before, {Code::joint_jump, Code::out_of_reach});
  });
}

TEST_CASE("a path run backwards mirrors its findings") {
  law("run backwards", [](Random&, RandomCase& c, const PathResult& before, CheckOptions& options,
                          std::vector<Mark>& e) {
    const auto broken = {Code::joint_jump, Code::out_of_reach, Code::branch_flip, Code::unproven};
    if (has(before, broken)) return false;
    const JointVector end = arrival(c.path, c.cell, options);
    const std::vector<Waypoint>& old = c.path.waypoints;
    for (const Waypoint& w : old) {
      if (w.tool != old[0].tool) return false;  // the way back would change it elsewhere
    }
    const Pose tool = c.cell.tools[static_cast<std::size_t>(*old[0].tool)].placement;
    const Pose start = ReferenceArm(c.cell.arm, tool, Orientation::full).forward(column_of(*old[0].joints));
    std::vector<Waypoint> turned;
    const int count = static_cast<int>(old.size());
    for (int i = count - 1; i >= 0; --i) {
      Waypoint w = old[static_cast<std::size_t>(i)];
      w.move = i == count - 1 ? Move::start : Move::linear;
      if (i < count - 1) {
        w.speed = old[static_cast<std::size_t>(i) + 1].speed;
        w.turn_rate = old[static_cast<std::size_t>(i) + 1].turn_rate;
        w.joints.reset();
      } else {
        w.joints = end;
        if (w.orientation == Orientation::full) w.pose.reset();
      }
      if (i == 0) {
        w.pose = start;
        w.frame.reset();
      }
      turned.push_back(w);
    }
    c.path.waypoints = turned;
    e = marks_of(before);
    for (Mark& m : e) {
      m.segment = count - m.segment;
      std::tie(m.begin, m.end) = std::pair(1 - m.end, 1 - m.begin);
      if (m.code == Code::joint_speed || m.code == Code::speed_margin) m.value = -m.value;
    }
    return true;
  });
}

namespace {

/// A margin that the cut parts from the error that it borders is raised by itself.
bool margin_at_cut(const Mark& m) {
  const bool margin = m.code == Code::limit_margin || m.code == Code::speed_margin;
  return margin && m.segment == 1 && m.begin <= 0.5 && m.end >= 0.5;
}

/// The marks of the segment in two halves, laid on the whole: joined where they meet in the middle, margins
/// beside their errors left out as they are inside one segment.
std::vector<Mark> joined(const std::vector<Mark>& marks) {
  std::vector<Mark> halves;
  for (Mark m : marks) {
    if (m.segment <= 2) {
      const double shift = m.segment == 2 ? 0.5 : 0.0;
      m.begin = 0.5 * m.begin + shift;
      m.end = 0.5 * m.end + shift;
      m.segment = 1;
    } else {
      --m.segment;
    }
    halves.push_back(m);
  }
  std::vector<Mark> out;
  for (const Mark& m : halves) {
    const auto other = std::find_if(out.begin(), out.end(), [&](const Mark& o) {
      return m.segment == 1 && o.segment == 1 && o.code == m.code && o.axis == m.axis && o.end == 0.5 &&
             m.begin == 0.5 && m.end > m.begin && o.end > o.begin;
    });
    if (other == out.end()) {
      out.push_back(m);
      continue;
    }
    other->end = m.end;
    other->sizeable = other->sizeable && m.sizeable;
    const bool worse = std::abs(m.value) > std::abs(other->value);
    if (m.code == Code::singular_pass || m.code == Code::limit_margin ? !worse : worse)
      other->value = m.value;
    if (m.code == Code::joint_limit)
      other->sizeable = false;  // which of two is worse depends on the limit's side
  }
  return out;
}

}  // namespace

TEST_CASE("a segment cut in two at its middle changes no finding") {
  Random random("cut in two");
  int compared = 0;
  for (int i = 0; compared < paths; ++i) {
    RandomCase c = law_case(random, i);
    const PathResult before = result_of(c);
    if (has(before, {Code::joint_jump, Code::out_of_reach, Code::branch_flip})) continue;
    const Waypoint& first = c.path.waypoints[0];
    Waypoint middle = c.path.waypoints[1];
    const Pose tool = c.cell.tools[static_cast<std::size_t>(*middle.tool)].placement;
    const Pose from = ReferenceArm(c.cell.arm, tool, Orientation::full).forward(column_of(*first.joints));
    const Pose outer =
        middle.frame ? c.cell.frames[static_cast<std::size_t>(*middle.frame)].placement : Pose{};
    const Pose to = outer * *middle.pose;
    middle.id = "middle";
    middle.frame.reset();
    middle.pose =
        Pose{Eigen::Quaterniond(from.rotation).slerp(0.5, Eigen::Quaterniond(to.rotation)).toRotationMatrix(),
             0.5 * (from.position + to.position)};
    c.path.waypoints.insert(c.path.waypoints.begin() + 1, middle);
    const PathResult after = result_of(c);
    ++compared;
    std::vector<Mark> whole = marks_of(before);
    std::vector<Mark> halves = joined(marks_of(after));
    std::erase_if(whole, margin_at_cut);
    std::erase_if(halves, margin_at_cut);
    for (const std::string& difference : differences(whole, halves, before))
      FAIL_CHECK("case ", i, ": ", difference);
  }
  MESSAGE(compared, " paths");
}

}  // namespace pathvet::test
