#include "pathvet/reporting/messages.hpp"

#include <doctest/doctest.h>

#include "reporting/sample_result.hpp"

using namespace pathvet;

namespace {

struct Words {
  Code code;
  const char* message;
  const char* remedy;
};

// In the order of the codes; the singular pass overlaps all of them, so remedies name it too.
const Words all_words[] = {
    {Code::arm_speed, "J2 moves at 312 mm/s; asked for is at most 250 mm/s.",
     "Set speed to at most 96.1 mm/s (now 120 mm/s), or tilt the tool or move the work so that the wrist "
     "stays bent by "
     "about 2 deg."},
    {Code::branch_flip,
     "The path leads exactly through a singularity of the wrist; the arm goes on smoothly, but from branch "
     "+++ to "
     "branch ++-.",
     "If the new branch is not wanted, keep well clear of the singularity (a near miss makes the joints "
     "spin), or "
     "change over by a joint move; teach what follows in the new branch."},
    {Code::joint_acceleration, "J1 would have to turn with 700 deg/s^2; it can do 500 deg/s^2 (140 %).",
     "No speed holds here: tilt the tool or move the work so that the wrist stays bent by about 2 deg."},
    {Code::joint_jump,
     "No continuous joint motion follows the path here: the arm would have to jump, J2 from -15 to 165 deg.",
     "Break the path 37.5 mm after B and go to the new configuration by a joint move clear of the work, or "
     "start from "
     "another branch, or tilt the tool or move the work so that the wrist stays bent by about 2 deg."},
    {Code::joint_limit, "J2 comes to 125 deg, 5 deg beyond its upper limit of 120 deg.",
     "Start from another branch, or turn the tool or move the work so that J2 gains at least 5 deg."},
    {Code::joint_speed, "J2 would have to turn at 450 deg/s; it can do 360 deg/s (125 %).",
     "Set speed to at most 93.7 mm/s (now 120 mm/s), or tilt the tool or move the work so that the wrist "
     "stays bent by "
     "about 2 deg."},
    {Code::limit_margin, "a comes within 4 mm of its lower limit (0 mm); the margin asked for is 10 mm.",
     "Fine if the real arm's limits are as in the cell file; for the full margin a has to stay 6 mm further "
     "inside: "
     "another branch, a tilted tool or moved work."},
    {Code::out_of_reach,
     "No configuration reaches the pose: the position is missed by 12.5 mm, the orientation by 4 deg.",
     "Move the path or the work by at least 12.5 mm into the reach, tilt the tool, or add a waypoint that "
     "leads "
     "around."},
    {Code::singular_pass,
     "Singularity of the wrist: smallest singular value 0.005 (threshold 0.02). The wrist is bent by only "
     "0.5 deg. J1 "
     "and J2 become fast there. Hardly possible there: turning about (0 1 0) of the world.",
     "Tilt the tool or move the work so that the wrist stays bent by about 2 deg; or make this a joint move "
     "if the "
     "line between does not matter."},
    {Code::speed_margin, "J1 turns at 162 deg/s, 90 % of the 180 deg/s that it can do.",
     "No speed holds here: tilt the tool or move the work so that the wrist stays bent by about 2 deg."},
    {Code::taught_mismatch, "J1 arrives at 45 deg where 405 deg is taught: 1 whole turn apart.",
     "Teach C again with the values it arrives with, or start so that the taught configuration is reached "
     "(another "
     "branch or whole turn), or reach it by a joint move."},
    {Code::unproven,
     "That the joints can follow here without a jump could not be proven; nothing worse was found.",
     "Treat it as singular: lead the path around this place, or watch it closely at reduced speed."},
};

}  // namespace

TEST_CASE("each code has its message and remedy") {
  const PathResult path = sample::full_path();
  REQUIRE(path.findings.size() == std::size(all_words));
  for (std::size_t i = 0; i < path.findings.size(); ++i) {
    REQUIRE(path.findings[i].code == all_words[i].code);
    CHECK(message(path, path.findings[i]) == all_words[i].message);
    CHECK(remedy(path, path.findings[i]) == all_words[i].remedy);
  }
}

TEST_CASE("an unbounded rate is told as such") {
  PathResult path = sample::empty_path();
  Finding f = sample::speed_finding();
  f.value.reset();
  f.unbounded = true;
  f.helpful_speed.reset();
  path.findings = {f};
  CHECK(message(path, f) ==
        "J2 would have to turn at an unbounded rate: it grows without end towards an end of this stretch; J2 "
        "can do 360 "
        "deg/s.");
  CHECK(remedy(path, f) ==
        "No speed holds here: move the path away from the edge of the reach, or start from another branch.");
}

TEST_CASE("the speed that helps is in the words of the move") {
  PathResult path = sample::empty_path();
  Finding f = sample::speed_finding();
  f.segment = 1;
  f.helpful_speed = 0.456789;
  CHECK(remedy(path, f) == "Set joint-rate to at most 45.6 %.");
  f.segment = 3;
  f.helpful_speed = sample::deg(30.5);
  CHECK(remedy(path, f) == "Set turn-rate to at most 30.5 deg/s.");
}

TEST_CASE("a joint beyond its limit that a whole turn would bring inside") {
  PathResult path = sample::empty_path();
  path.axes[2].lower = sample::deg(-360);
  path.axes[2].upper = sample::deg(100);
  path.axes[2].min = sample::deg(60);
  path.axes[2].max = sample::deg(130);
  const Finding f =
      sample::finding(Code::joint_limit, 2, 2, sample::deg(130), sample::deg(100), Quantity::angle);
  CHECK(message(path, f) == "J2 comes to 130 deg, 30 deg beyond its upper limit of 100 deg.");
  CHECK(remedy(path, f) ==
        "Start with J2 1 whole turn lower: its whole range on this path then lies inside the limits.");
}

TEST_CASE("a lower limit broken, on a joint move") {
  PathResult path = sample::empty_path();
  Finding f =
      sample::finding(Code::joint_limit, 1, 1, sample::deg(-171.5), sample::deg(-170), Quantity::angle);
  CHECK(message(path, f) == "J1 comes to -171.5 deg, 1.5 deg beyond its lower limit of -170 deg.");
  CHECK(remedy(path, f) ==
        "Give this move a target inside the limits, or another configuration of the same pose (pathvet pose "
        "lists "
        "them).");
}

TEST_CASE("a combined limit stands where a joint would") {
  PathResult path = sample::empty_path();
  path.axes[3].min = sample::deg(-198);
  const Finding f =
      sample::finding(Code::limit_margin, 2, 3, sample::deg(2), sample::deg(3), Quantity::angle);
  CHECK(message(path, f) ==
        "J1+J2 comes within 2 deg of its lower limit (-200 deg); the margin asked for is 3 deg.");
}

TEST_CASE("an orientation that can't be had") {
  Finding f = sample::finding(Code::out_of_reach, 2, -1, sample::deg(7.5), 0, Quantity::angle);
  f.position_miss = 0.0;
  CHECK(message(sample::empty_path(), f) ==
        "No configuration reaches the pose: the orientation is missed by 7.5 deg.");
  CHECK(remedy(sample::empty_path(), f) ==
        "Tilt the tool by at least 7.5 deg (orientation=\"axis\" if its turn about its own axis is free), or "
        "move the "
        "work.");
}

TEST_CASE("rounding noise is no part of a message") {
  Finding jump = sample::jump_finding();
  jump.to_joints[0] += 1e-9;
  CHECK(message(sample::empty_path(), jump).ends_with("the arm would have to jump, J2 from -15 to 165 deg."));
  Finding reach = sample::finding(Code::out_of_reach, 2, -1, 12.5, 0, Quantity::length);
  reach.orientation_miss = 1e-16;
  CHECK(message(sample::empty_path(), reach) ==
        "No configuration reaches the pose: the position is missed by 12.5 mm.");
}
