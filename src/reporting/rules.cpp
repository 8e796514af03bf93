#include "reporting/rules.hpp"

#include <array>

namespace pathvet::reporting {
namespace {

// In the order of Code.
constexpr std::array<Rule, code_count> rules = {{
    {"A point of the arm moves faster than the reduced speed asked for.",
     "Joint centres can move faster than the TCP, above all near singularities and while the tool turns. "
     "Lower "
     "the segment's speed, or let the arm do the move in a posture in which its elbow and wrist have less "
     "way."},
    {"The arm changes its branch along a Cartesian move.",
     "The move leads through a singular configuration, behind which wrist, elbow or shoulder are folded the "
     "other way. Whether the controller follows is open. Lead the path around the singularity, or make the "
     "change a joint move of its own."},
    {"The programmed motion asks more acceleration than the joint has.",
     "The joint can't keep up, and the TCP leaves the path or the arm stops. Lower the segment's speed; time "
     "grows with the inverse of speed, acceleration falls with its square."},
    {"No continuous joint motion follows the path.",
     "At this place the arm's configuration would have to jump. Choose another start configuration, lead the "
     "path "
     "elsewhere, or change the configuration in a joint move between two waypoints."},
    {"A joint, or a combined limit, is outside its range.",
     "The arm would stop here. Another start configuration (a whole turn counts), another tilt of the tool "
     "or "
     "another place of the work keeps the joint inside."},
    {"The programmed motion asks more speed than the joint has.",
     "The joint can't keep up: the TCP slows down, leaves the path, or the arm stops. Lower the segment's "
     "speed, "
     "or keep away from the singularity that makes the joint fast."},
    {"A joint comes near a limit.",
     "There is little room left for calibration and for changes of the path. Nothing is wrong with the "
     "nominal "
     "path; move the work or choose another configuration where more room is wanted."},
    {"No configuration of the arm reaches the pose.",
     "Move the work or the arm, shorten the way, or free the orientation where the process allows it."},
    {"The path passes near a singular configuration.",
     "Near it small motions of the TCP take large motions of some joints, and one direction of motion is "
     "nearly "
     "lost. Tilt the tool or move the work to pass at a greater distance."},
    {"A joint comes near its greatest speed.",
     "There is little room for a higher override or for corrections. Lower the segment's speed where room is "
     "wanted."},
    {"The arm arrives in another configuration than the taught one.",
     "Taught joint values and the motion before them contradict each other, be it by a whole turn. The arm "
     "will "
     "jerk, turn or stop here; teach the waypoint from the configuration in which the arm arrives."},
    {"Continuity could not be proven on this stretch.",
     "Nothing worse was found here, yet the samples don't prove that there is nothing. Check with a smaller "
     "step, and look at the stretch on the real arm at reduced speed."},
}};

}  // namespace

const Rule& rule(Code code) {
  return rules.at(static_cast<std::size_t>(code));
}

}  // namespace pathvet::reporting
