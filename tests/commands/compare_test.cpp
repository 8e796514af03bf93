#include "commands/compare.hpp"

#include <doctest/doctest.h>

#include <nlohmann/json.hpp>

#include "commands/support.hpp"

using namespace pathvet::commands;
using pathvet::testing::contents;
using pathvet::testing::Folder;
using pathvet::testing::Outcome;
using pathvet::testing::run;
using pathvet::testing::write_small_cell;

TEST_CASE("compare: the words of the call") {
  CHECK(setup_compare({"a", "b"}).problems.empty());
  for (const Arguments& words : {Arguments{}, Arguments{"a"}, Arguments{"a", "b", "c"}}) {
    CHECK(setup_compare(words).problems ==
          std::vector<std::string>{"compare takes two reports: the older and the newer one"});
  }
  CHECK(setup_compare({"a", "b"}).settings.wants_text());
  CHECK(!setup_compare({"a", "b", "--quiet"}).settings.wants_text());
  CHECK(!setup_compare({"a", "b", "--json", "-"}).settings.wants_text());
}

TEST_CASE("compare: status 1 where a change brought a finding, 0 where it took it away") {
  const Folder folder;
  write_small_cell(folder);
  REQUIRE(run(folder, "pathvet check path.xml --quiet --json good.json").status == 0);
  write_small_cell(folder, "175");
  REQUIRE(run(folder, "pathvet check path.xml --quiet --json bad.json").status == 1);
  const Outcome worse = run(folder, "pathvet compare good.json bad.json");
  CHECK(worse.status == 1);
  CHECK(worse.out.rfind("WORSE: 1 new, ", 0) == 0);
  CHECK(worse.err.empty());
  const Outcome better = run(folder, "pathvet compare bad.json good.json --json c.json --quiet");
  CHECK(better.status == 0);
  CHECK(better.out.empty());
  CHECK(nlohmann::json::parse(contents(folder / "c.json"))["counts"]["fixed"] == 1);
}

TEST_CASE("compare: files that are no reports, and an output that is an input") {
  const Folder folder;
  folder.write("a.json", "{\n \"format\" 1}");
  folder.write("b.json", "{}");
  const Outcome outcome = run(folder, "pathvet compare a.json b.json --json c.json");
  CHECK(outcome.status == 2);
  CHECK(outcome.err.rfind("a.json:2:11: error: this is no JSON", 0) == 0);
  CHECK(outcome.err.find("\nb.json:1:1: error: this is no pathvet report: ") != std::string::npos);
  CHECK(folder.entries() == 2);
  CHECK(run(folder, "pathvet compare a.json gone.json").status == 2);
  CHECK(run(folder, "pathvet compare a.json b.json --json a.json").status == 2);
  CHECK(contents(folder / "b.json") == "{}");
}

TEST_CASE("check writes SARIF, JUnit and CSV") {
  const Folder folder;
  write_small_cell(folder, "175");
  const Outcome outcome = run(folder, "pathvet check path.xml --sarif s.sarif --junit j.xml --csv c.csv");
  CHECK(outcome.status == 1);
  const auto log = nlohmann::json::parse(contents(folder / "s.sarif"));
  CHECK(log["runs"][0]["results"][0]["ruleId"] == "joint-limit");
  CHECK(contents(folder / "j.xml").find("<testcase name=\"B to C\"") != std::string::npos);
  CHECK(contents(folder / "c.csv").find("\r\nfinding,path.xml,") != std::string::npos);
  CHECK(run(folder, "pathvet check path.xml --csv path.xml").status == 2);
  CHECK(run(folder, "pathvet check path.xml --csv - --junit -").status == 2);
}
