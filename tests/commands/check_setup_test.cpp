#include <doctest/doctest.h>

#include <string>

#include "commands/check.hpp"
#include "pathvet/model/units.hpp"

using namespace pathvet;
using namespace pathvet::commands;

TEST_CASE("the defaults are the contract's") {
  const auto setup = setup_check({"path.xml"});
  CHECK(setup.problems.empty());
  const CheckOptions& options = setup.settings.options;
  CHECK(options.step_length == 1);
  CHECK(options.step_angle == 0.5 * radians_per_degree);
  CHECK(options.limit_margin_angle == 3 * radians_per_degree);
  CHECK(options.limit_margin_length == 10);
  CHECK(options.speed_margin == 0.85);
  CHECK(options.singular_below == 0.02);
  CHECK(!options.reduced_speed);
  CHECK(!setup.settings.strict);
  CHECK(setup.settings.wants_text());
}

TEST_CASE("every option arrives in its field") {
  const auto setup = setup_check({"a.xml",    "--cell",
                                  "c.xml",    "--json",
                                  "r.json",   "--trace",
                                  "t.csv",    "--quiet",
                                  "--strict", "--threads",
                                  "3",        "--limit-margin",
                                  "5",        "--limit-margin-mm",
                                  "20",       "--speed-margin",
                                  "90",       "--singular-below",
                                  "0.05",     "--step-mm",
                                  "0.5",      "--step-deg",
                                  "0.25",     "--reduced-speed",
                                  "250",      "--log-level",
                                  "debug"});
  CHECK(setup.problems.empty());
  const CheckSettings& s = setup.settings;
  CHECK(s.paths == std::vector<std::string>{"a.xml"});
  CHECK(s.cell == "c.xml");
  CHECK(s.json.value().target == "r.json");
  CHECK(s.trace.value().target == "t.csv");
  CHECK(s.quiet);
  CHECK(s.strict);
  CHECK(s.options.threads == 3);
  CHECK(s.options.limit_margin_angle == 5 * radians_per_degree);
  CHECK(s.options.limit_margin_length == 20);
  CHECK(s.options.speed_margin == 0.9);
  CHECK(s.options.singular_below == 0.05);
  CHECK(s.options.step_length == 0.5);
  CHECK(s.options.step_angle == 0.25 * radians_per_degree);
  CHECK(s.options.reduced_speed == 250);
  CHECK(s.log_level == spdlog::level::debug);
}

TEST_CASE("a speed margin may be written as a share") {
  CHECK(setup_check({"a.xml", "--speed-margin", "0.9"}).settings.options.speed_margin == 0.9);
  CHECK(setup_check({"a.xml", "--speed-margin", "1"}).settings.options.speed_margin == 0.01);
}

TEST_CASE("text goes to standard output unless something else does") {
  CHECK(setup_check({"a.xml", "--json", "r.json"}).settings.wants_text());
  CHECK(!setup_check({"a.xml", "--json", "-"}).settings.wants_text());
  CHECK(!setup_check({"a.xml", "--trace=-"}).settings.wants_text());
  CHECK(!setup_check({"a.xml", "--quiet"}).settings.wants_text());
}

TEST_CASE("help is asked for whatever else is wrong") {
  CHECK(setup_check({"--help"}).wants_help);
  CHECK(setup_check({"--help", "--nope"}).wants_help);
}

TEST_CASE("each bad combination has its one problem") {
  struct Row {
    Arguments arguments;
    const char* problem;
  };
  const Row rows[] = {
      {{}, "no path file is named"},
      {{"-"}, "a path can't be read from standard input; name a file"},
      {{"a", "b", "--trace", "t.csv"}, "--trace takes one path at a time"},
      {{"a", "--json", "-", "--trace", "-"},
       "only one output can go to standard output, not --json and --trace"},
      {{"a", "--jso", "x"}, "unknown option --jso"},
      {{"a", "--threads", "0"}, "--threads must be a whole number from 1 to 1024"},
      {{"a", "--threads", "two"}, "--threads must be a whole number, not 'two'"},
      {{"a", "--step-mm", "0"}, "--step-mm must be at least 0.000001 (mm)"},
      {{"a", "--step-deg", "-1"}, "--step-deg must be at least 0.000001 (degrees)"},
      {{"a", "--speed-margin", "101"}, "--speed-margin must be above 0 and at most 100 (percent)"},
      {{"a", "--speed-margin", "0"}, "--speed-margin must be above 0 and at most 100 (percent)"},
      {{"a", "--limit-margin", "-0.1"}, "--limit-margin must not be negative (degrees)"},
      {{"a", "--limit-margin-mm", "x"}, "--limit-margin-mm: 'x' is not a number"},
      {{"a", "--singular-below", "-1"}, "--singular-below must not be negative (a singular value)"},
      {{"a", "--reduced-speed", "0"}, "--reduced-speed must be above 0 (mm/s)"},
      {{"a", "--log-level", "loud"},
       "--log-level must be one of trace, debug, info, warn, error, off, not 'loud'"},
  };
  for (const Row& row : rows) {
    CHECK(setup_check(row.arguments).problems == std::vector<std::string>{row.problem});
  }
}

TEST_CASE("all problems of a call are told together") {
  const auto problems = setup_check({"--nope", "--step-mm", "0", "--threads", "x", "--json"}).problems;
  CHECK(problems.size() == 5);
}

TEST_CASE("the help names every option") {
  const std::string help = check_help();
  for (const char* option : {"--cell", "--json", "--trace", "--quiet", "--threads", "--strict",
                             "--limit-margin", "--limit-margin-mm", "--speed-margin", "--singular-below",
                             "--step-mm", "--step-deg", "--reduced-speed", "--log-level", "--help"}) {
    CHECK_MESSAGE(help.find(option) != std::string::npos, option);
  }
}
