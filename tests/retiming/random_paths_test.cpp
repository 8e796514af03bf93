// 200 random paths near an arm's singularities: what was written holds, and costs little more than it has to.
#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <filesystem>
#include <string>

#include <doctest/doctest.h>

#include "pathvet/kinematics/chain.hpp"
#include "pathvet/retiming/profile.hpp"
#include "pathvet/xml/rewrite.hpp"
#include "retiming/best_partition.hpp"
#include "retiming/support.hpp"
#include "support/seed.hpp"

namespace pathvet {
namespace {

using namespace test;

constexpr double degree = radians_per_degree;

std::string pose_text(const Pose& pose) {
  const Eigen::Quaterniond q(pose.rotation);
  const Vector3& p = pose.position;
  return fmt::format(
      "<pose position=\"{:.9f} {:.9f} {:.9f}\" quaternion=\"{:.12f} {:.12f} {:.12f} {:.12f}\"/>", p.x(),
      p.y(), p.z(), q.w(), q.x(), q.y(), q.z());
}

Vector3 random_vector(Random& random, double size) {
  return size * Vector3(random.normal(), random.normal(), random.normal()).normalized();
}

/// Three or four Cartesian moves from a random configuration, at speeds that ask too much now and then.
std::string random_path(Random& random, const Cell& cell, bool blends) {
  JointVector q(6);
  q << random.uniform(-90, 90), random.uniform(50, 110), random.uniform(-50, 20), random.uniform(-120, 120),
      random.uniform(3, 60) * (random.chance(0.5) ? 1 : -1), random.uniform(-120, 120);
  Pose pose = Chain(cell.arm, cell.tools[0].placement).forward(q * degree);
  std::string text = fmt::format(
      "<path version=\"1\" cell=\"c\" tool=\"{}\" speed=\"{:.3f}\" turn-rate=\"{:.3f}\"{}>\n",
      cell.tools[0].name, random.uniform(100, 700), random.uniform(60, 300), blends ? " blend=\"8\"" : "");
  text += fmt::format(
      "  <waypoint id=\"P0\"> <joints>{:.6f} {:.6f} {:.6f} {:.6f} {:.6f} {:.6f}</joints> </waypoint>\n", q[0],
      q[1], q[2], q[3], q[4], q[5]);
  const int count = random.integer(3, 4);
  for (int i = 1; i <= count; ++i) {
    Pose next = pose;
    const bool on_the_spot = !blends && random.chance(0.1);
    if (!on_the_spot) next.position += random_vector(random, random.uniform(40, 250));
    if (on_the_spot || random.chance(0.6))
      next.rotation = rotation_from_vector(random_vector(random, random.uniform(0.1, 1.2))) * next.rotation;
    const bool arc = !on_the_spot && random.chance(0.3);
    if (arc) {
      const Vector3 chord = next.position - pose.position;
      Vector3 side = random_vector(random, 1);
      side = (side - side.dot(chord) / chord.squaredNorm() * chord).normalized();
      const Vector3 via =
          pose.position + random.uniform(0.3, 0.7) * chord + random.uniform(0.1, 0.5) * chord.norm() * side;
      text += fmt::format(
          "  <waypoint id=\"P{}\" move=\"circular\"> <via position=\"{:.9f} {:.9f} {:.9f}\"/> {} "
          "</waypoint>\n",
          i, via.x(), via.y(), via.z(), pose_text(next));
    } else {
      text += fmt::format("  <waypoint id=\"P{}\" move=\"linear\"> {} </waypoint>\n", i, pose_text(next));
    }
    pose = next;
  }
  return text + "</path>\n";
}

Cell fixture_cell(bool accelerations) {
  const auto file = std::filesystem::path(PATHVET_SOURCE_DIR) / "fixtures" / "cells" / "bracket-trimming.xml";
  Cell cell = cell_of(*read_text(file.string()));
  for (Joint& joint : cell.arm.joints) {
    if (!accelerations) joint.acceleration.reset();
  }
  return cell;
}

TEST_CASE("200 random paths by stretch: nothing too fast is left, and the gap is what it has to be") {
  Random random("random paths by stretch");
  const Cell cell = fixture_cell(false);
  int cut = 0, hopeless = 0, beyond = 0;
  double worst = 0;
  for (int run = 0; run < 200; ++run) {
    CAPTURE(run);
    const std::string text = random_path(random, cell, false);
    const Path path = path_of(text, cell);
    const Recording recording = recording_of(path, cell);
    const auto reading = retime(recording, text, path, cell, {});
    for (const Fault& fault : reading.faults) FAIL_CHECK(to_string(fault));
    if (!reading.value) continue;
    const Retiming& r = *reading.value;
    const std::vector<RateLimit> limits = rate_limits(cell, 0);
    std::vector<bool> helped(r.after.segments.size(), false);
    std::size_t at = 0;
    for (std::size_t i = 0; i < r.segments.size(); ++i) {
      const RetimedSegment& segment = r.segments[i];
      hopeless += !segment.hopeless.empty();
      for (std::size_t k = 0; k < segment.stretches.size(); ++k) helped[at++] = segment.hopeless.empty();
      if (!segment.hopeless.empty() || !segment.changed()) continue;
      ++cut;
      CHECK(segment.new_duration >= segment.bound * (1 - 1e-6));
      if (segment.new_duration <= 1.05 * segment.bound) continue;
      ++beyond;
      const RecordedSegment& recorded = recording.segments[i];
      const double best = best_partition(needed_density(recorded, limits, true, true), recorded.duration, 8);
      worst = std::max(worst, segment.new_duration / best - 1);
      CHECK(segment.new_duration <= 1.01 * best);
    }
    REQUIRE(at == r.after.segments.size());
    for (const Finding& f : r.after.findings) {
      if (helped[static_cast<std::size_t>(f.segment - 1)]) CHECK(f.code != Code::joint_speed);
    }
  }
  MESSAGE(cut, " segments changed, ", beyond, " of them beyond 5 % of the bound, the worst ", 100 * worst,
          " % above the best of eight cuts; ", hopeless, " left as they were");
  CHECK(cut > 100);
}

TEST_CASE("random paths with rounded corners and accelerations: nothing too fast is left") {
  Random random("random rounded paths");
  const Cell cell = fixture_cell(true);
  int changed = 0;
  for (int run = 0; run < 60; ++run) {
    CAPTURE(run);
    const std::string text = random_path(random, cell, run % 2 == 0);
    RetimeOptions options;
    options.most_cuts = run % 3 == 0 ? 0 : 6;
    options.faster = run % 5 == 0;
    const Retiming r = retimed(text, cell, options);
    if (std::ranges::any_of(r.segments, [](const RetimedSegment& s) { return !s.hopeless.empty(); }))
      continue;
    changed += r.text != text;
    CHECK(too_fast(r.after) == 0);
    CHECK(r.after.length == doctest::Approx(r.before.length).epsilon(1e-7));
  }
  CHECK(changed > 20);
}

/// Passes the profile's place on a segment by the exact curve of the joints.
class ExactCurve final : public CheckObserver {
 public:
  explicit ExactCurve(const Profile& profile, const std::vector<RateLimit>& limits)
      : profile_(profile), limits_(limits) {}

  void step(int segment, const Step& step, const StepSampler& sampler) override {
    for (double share : {0.17, 0.43, 0.71}) {
      Node node;
      sampler.at(step, share * step.length, node);
      look(segment, node);
    }
  }

  double worst = 0;
  long looked = 0;

 private:
  void look(int segment, const Node& node) {
    const auto& points = profile_.points;
    const auto after = std::upper_bound(points.begin(), points.end(), std::pair(segment, node.fraction),
                                        [](const std::pair<int, double>& place, const ProfilePoint& p) {
                                          return place < std::pair(p.segment, p.fraction);
                                        });
    if (after == points.begin() || after == points.end()) return;
    const ProfilePoint& a = *(after - 1);
    const ProfilePoint& b = *after;
    if (a.segment != segment || b.segment != segment) return;
    // On an interval the squared rate of the fraction is straight.
    const double h = b.fraction - a.fraction;
    if (!(h > 0)) return;
    const double rate_a = a.rate;
    const double rate_b = b.rate;
    const double share = (node.fraction - a.fraction) / h;
    const double square = (1 - share) * rate_a * rate_a + share * rate_b * rate_b;
    const double u = (rate_b * rate_b - rate_a * rate_a) / (2 * h);
    ++looked;
    const JointVector first = node.rate / node.fraction_rate;
    const JointVector second =
        (node.rate_rate - first * node.fraction_rate_rate) / (node.fraction_rate * node.fraction_rate);
    for (const RateLimit& limit : limits_) {
      const double speed = std::abs(limit.of(first)) * std::sqrt(square);
      worst = std::max(worst, speed / *limit.speed - 1);
      if (limit.acceleration)
        worst = std::max(worst,
                         std::abs(limit.of(first) * u + limit.of(second) * square) / *limit.acceleration - 1);
    }
  }

  const Profile& profile_;
  const std::vector<RateLimit>& limits_;
};

TEST_CASE(
    "random paths by profile: no limit broken on the exact curve, and within 0.5 % of a ten times finer "
    "grid") {
  Random random("random paths by profile");
  const Cell cell = fixture_cell(true);
  double worst = 0, coarse = 0;
  long looked = 0;
  for (int run = 0; run < 30; ++run) {
    CAPTURE(run);
    const std::string text = random_path(random, cell, false);
    const Path path = path_of(text, cell);
    const Recording recording = recording_of(path, cell);
    if (std::ranges::any_of(recording.segments, [](const RecordedSegment& s) { return !s.hopeless.empty(); }))
      continue;
    const Profile profile = time_optimal_profile(recording, path, cell, {});
    ProfileOptions fine;
    fine.finer = 10;
    const double finer = time_optimal_profile(recording, path, cell, fine).duration;
    coarse = std::max(coarse, std::abs(profile.duration / finer - 1));
    CHECK(std::abs(profile.duration / finer - 1) < 0.005);
    const std::vector<RateLimit> limits = rate_limits(cell, 0);
    ExactCurve curve(profile, limits);
    REQUIRE(check_path(path, cell, CheckOptions{}, &curve).value.has_value());
    worst = std::max(worst, curve.worst);
    looked += curve.looked;
    CHECK(curve.worst < 1e-6);
  }
  MESSAGE("worst excess ", worst, " at ", looked, " places; greatest difference to a ten times finer grid ",
          coarse);
  CHECK(looked > 10000);
}

}  // namespace
}  // namespace pathvet
