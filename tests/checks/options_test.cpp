#include <doctest/doctest.h>

#include <cmath>
#include <functional>
#include <string>

#include "pathvet/checks/result.hpp"

using namespace pathvet;

TEST_CASE("the default options are usable") {
  CHECK(CheckOptions().problems().empty());
}

TEST_CASE("each unusable option is told by its name on the command line") {
  struct Row {
    const char* option;
    std::function<void(CheckOptions&)> spoil;
  };
  const Row rows[] = {{"--step-mm", [](CheckOptions& o) { o.step_length = 0; }},
                      {"--step-mm", [](CheckOptions& o) { o.step_length = NAN; }},
                      {"--step-deg", [](CheckOptions& o) { o.step_angle = -1; }},
                      {"--step-deg", [](CheckOptions& o) { o.step_angle = INFINITY; }},
                      {"--limit-margin ", [](CheckOptions& o) { o.limit_margin_angle = -1e-9; }},
                      {"--limit-margin-mm", [](CheckOptions& o) { o.limit_margin_length = -1; }},
                      {"--speed-margin", [](CheckOptions& o) { o.speed_margin = 0; }},
                      {"--speed-margin", [](CheckOptions& o) { o.speed_margin = 1.0001; }},
                      {"--speed-margin", [](CheckOptions& o) { o.speed_margin = NAN; }},
                      {"--singular-below", [](CheckOptions& o) { o.singular_below = -1; }},
                      {"--reduced-speed", [](CheckOptions& o) { o.reduced_speed = 0; }},
                      {"--threads", [](CheckOptions& o) { o.threads = 0; }},
                      {"--threads", [](CheckOptions& o) { o.threads = 1025; }}};
  for (const Row& row : rows) {
    CAPTURE(row.option);
    CheckOptions options;
    row.spoil(options);
    const auto problems = options.problems();
    REQUIRE(problems.size() == 1);
    CHECK(problems[0].rfind(row.option, 0) == 0);
  }
}

TEST_CASE("all problems are told at once, and the edges are usable") {
  CheckOptions bad;
  bad.step_length = 0;
  bad.threads = 0;
  CHECK(bad.problems().size() == 2);
  CheckOptions edge;
  edge.limit_margin_angle = 0;
  edge.limit_margin_length = 0;
  edge.speed_margin = 1;
  edge.singular_below = 0;
  edge.threads = 1024;
  CHECK(edge.problems().empty());
}
