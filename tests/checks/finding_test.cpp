#include "pathvet/checks/finding.hpp"

#include <doctest/doctest.h>

#include <string>
#include <vector>

using namespace pathvet;

TEST_CASE("codes are in the alphabetical order of their names") {
  for (int code = 1; code <= static_cast<int>(Code::unproven); ++code) {
    CHECK(std::string(name(static_cast<Code>(code - 1))) < name(static_cast<Code>(code)));
  }
}

TEST_CASE("names and levels are the contract's") {
  struct Row {
    Code code;
    const char* name;
    Level level;
  };
  const std::vector<Row> rows = {{Code::joint_limit, "joint-limit", Level::error},
                                 {Code::limit_margin, "limit-margin", Level::warning},
                                 {Code::joint_speed, "joint-speed", Level::error},
                                 {Code::speed_margin, "speed-margin", Level::warning},
                                 {Code::joint_acceleration, "joint-acceleration", Level::error},
                                 {Code::singular_pass, "singular-pass", Level::warning},
                                 {Code::branch_flip, "branch-flip", Level::error},
                                 {Code::joint_jump, "joint-jump", Level::error},
                                 {Code::out_of_reach, "out-of-reach", Level::error},
                                 {Code::taught_mismatch, "taught-mismatch", Level::error},
                                 {Code::unproven, "unproven", Level::warning}};
  for (const Row& row : rows) {
    CHECK(std::string(name(row.code)) == row.name);
    CHECK(level(row.code) == row.level);
  }
}

TEST_CASE("kinds of singularities") {
  CHECK(std::string(name(SingularKind::wrist)) == "wrist");
  CHECK(std::string(name(SingularKind::elbow)) == "elbow");
  CHECK(std::string(name(SingularKind::shoulder)) == "shoulder");
  CHECK(std::string(name(SingularKind::general)) == "general");
}
