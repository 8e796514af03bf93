#include "laws.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

namespace pathvet::test {
namespace {

constexpr double place_length = 0.01;                     // mm
constexpr double place_turn = 0.01 * radians_per_degree;  // rad
constexpr double value_share = 1e-4;
/// A finding shorter than this (of the segment) may only just happen, or not.
constexpr double sliver = 1e-7;

bool names_a_value(Code code) {
  return code == Code::joint_limit || code == Code::limit_margin || code == Code::joint_speed ||
         code == Code::speed_margin || code == Code::singular_pass || code == Code::joint_acceleration;
}

std::string describe(const Mark& m) {
  return fmt::format("segment {}: {} axis {} from {:.12g} to {:.12g}, value {:.12g}", m.segment, name(m.code),
                     m.axis, m.begin, m.end, m.value);
}

}  // namespace

std::vector<Mark> marks_of(const PathResult& result) {
  std::vector<Mark> out;
  for (const Finding& f : result.findings) {
    const bool counts = names_a_value(f.code) && f.value.has_value();
    out.push_back({f.segment, f.code, f.axis, f.begin, f.end, counts ? *f.value : 0.0, counts});
  }
  return out;
}

std::vector<std::string> differences(std::vector<Mark> expected, std::vector<Mark> found,
                                     const PathResult& result) {
  std::vector<std::string> out;
  for (const Mark& e : expected) {
    const SegmentResult& segment = result.segments[static_cast<std::size_t>(e.segment - 1)];
    const double tolerance =
        segment.length > 1e-6 ? place_length / segment.length : place_turn / segment.turn;
    const auto fits = [&](const Mark& f) {
      if (f.segment != e.segment || f.code != e.code || f.axis != e.axis) return false;
      if (std::abs(f.begin - e.begin) > tolerance || std::abs(f.end - e.end) > tolerance) return false;
      const double slack = value_share * std::abs(e.value) + (e.code == Code::singular_pass ? 1e-6 : 1e-5);
      return !e.sizeable || !f.sizeable || std::abs(f.value - e.value) <= slack;
    };
    const auto match = std::find_if(found.begin(), found.end(), fits);
    if (match != found.end()) {
      found.erase(match);
    } else if (e.end - e.begin > sliver || e.begin == e.end) {
      out.push_back("lost: " + describe(e));
    }
  }
  for (const Mark& f : found) {
    if (f.end - f.begin > sliver || f.begin == f.end) out.push_back("new: " + describe(f));
  }
  return out;
}

JointVector arrival(const Path& path, const Cell& cell, const CheckOptions& options) {
  class Last final : public CheckObserver {
   public:
    JointVector joints;
    [[nodiscard]] bool wants_samples() const override { return true; }
    void sample(const TraceSample& s) override { joints = s.joints; }
  };
  Last last;
  (void)check_path(path, cell, options, &last);
  return last.joints;
}

RandomCase law_case(Random& random, int number) {
  // Near their singularities the arms with four and three joints leave their reach, and laws are about what
  // is met; the sliding ones take long where they do.
  constexpr ArmKind near[] = {ArmKind::spherical_wrist, ArmKind::three_parallel, ArmKind::general_six,
                              ArmKind::axis_five};
  const bool anywhere = number % 2 == 0;
  const auto turn = static_cast<std::size_t>(number / 2);
  const ArmKind kind = anywhere ? arm_kinds[turn % std::size(arm_kinds)] : near[turn % std::size(near)];
  while (true) {
    const double distance = std::pow(10.0, random.uniform(-2, 2));
    auto c = anywhere ? random_case(random, kind) : near_singular_case(random, kind, distance);
    if (!c) continue;
    // Two segments are enough to have a waypoint in between.
    if (c->path.waypoints.size() > 3) c->path.waypoints.resize(3);
    return std::move(*c);
  }
}

}  // namespace pathvet::test
