#include <cmath>
#include <string>

#include <doctest/doctest.h>

#include "pathvet/retiming/corners.hpp"
#include "retiming/support.hpp"

namespace pathvet {
namespace {

using namespace test;

/// A right angle of two sliding joints, rounded by 20 mm; programmed at `in` and `out` mm/s.
std::string right_angle(const std::string& in, const std::string& out) {
  return R"(<path version="1" cell="c" speed=")" + in + R"(" orientation="free" blend="20">
<waypoint id="A"> <joints>0 0</joints> </waypoint>
<waypoint id="B" move="linear"> <pose position="100 0 0"/> </waypoint>
<waypoint id="C" move="linear" speed=")" +
         out + R"("> <pose position="100 100 0"/> </waypoint>
</path>
)";
}

// With x = b - b (1 - u)^2 and y = b u^2 on the corner, r^2 = ((1 - u) v1^2 + u v2^2) / 4 b^2 and g = (v2^2 -
// v1^2) / 8 b^2: x'' r^2 + x' g = (v2^2 - 3 v1^2) / 4 b at the begin and -v2^2 / 2 b at the end, y likewise
// with the speeds exchanged. So at equal speeds v^2 <= 2 a b, and v2^2 <= min(2 a b, (4 a b + v1^2) / 3).
TEST_CASE("a right angle by two axes: the speeds that its accelerations allow, whatever was programmed") {
  const Cell cell = cell_of(gantry_cell);  // a = 400 mm/s^2
  const std::vector<RateLimit> limits = rate_limits(cell, 0);
  for (const auto& [in, out] : {std::pair("50", "50"), std::pair("190", "40"), std::pair("30", "170")}) {
    const Path path = path_of(right_angle(in, out), cell);
    const Recording recording = recording_of(path, cell);
    const auto corner = CornerLimits::between(recording.segments[0], recording.segments[1], limits);
    REQUIRE(corner.has_value());
    CHECK(corner->common_speed() == doctest::Approx(std::sqrt(2.0 * 400 * 20)).epsilon(1e-9));
    CHECK(corner->most_after(60, 1000) ==
          doctest::Approx(std::sqrt((4.0 * 400 * 20 + 3600) / 3)).epsilon(1e-9));
    CHECK(corner->most_before(60, 1000) ==
          doctest::Approx(std::sqrt((4.0 * 400 * 20 + 3600) / 3)).epsilon(1e-9));
    CHECK(corner->most_after(60, 100) == 100);
    CHECK(corner->holds(60, 108.9));
    CHECK(!corner->holds(60, 109));
  }
  const Path straight = path_of(right_angle("50", "50"), cell);
  const Recording recording = recording_of(straight, cell);
  CHECK(!CornerLimits::between(recording.segments[1], recording.segments[0], limits).has_value());
}

TEST_CASE(
    "speeds on both sides of a rounded corner: the slow one stays, the fast one is lowered to what holds") {
  const Retiming r = retimed(right_angle("60", "195"), cell_of(gantry_cell), by_segment());
  CHECK(r.segments[0].stretches[0].speed == doctest::Approx(60));
  CHECK(r.segments[1].stretches[0].speed ==
        doctest::Approx(std::sqrt((4.0 * 400 * 20 + 3600) / 3)).epsilon(1e-6));
  CHECK(too_fast(r.after) == 0);
  // In stretches only the ends beside the corner are slow.
  const Retiming cut = retimed(right_angle("60", "195"), cell_of(gantry_cell));
  REQUIRE(cut.segments[1].stretches.size() == 2);
  CHECK(cut.segments[1].stretches[0].end * cut.before.segments[1].length < 45);
  CHECK(cut.segments[1].stretches[1].speed == doctest::Approx(195));
}

}  // namespace
}  // namespace pathvet
