#include <doctest/doctest.h>

#include <nlohmann/json.hpp>

#include "commands/retime.hpp"
#include "commands/support.hpp"

using namespace pathvet::commands;
using pathvet::testing::contents;
using pathvet::testing::Folder;
using pathvet::testing::Outcome;
using pathvet::testing::run;
using Json = nlohmann::json;

namespace {

/// A line of a planar arm that ends near full stretch: too fast for J2 there. `end` is the last x (reach
/// 1000).
void write_planar(const Folder& folder, const std::string& end = "998") {
  folder.write("cell.xml",
               R"(<cell version="1" name="plane"><arm name="two links" characteristic-length="1000">
<joint name="J1" type="revolute" lower="-360" upper="360" speed="1000" acceleration="5000"><dh theta="0" d="0" a="600" alpha="0"/></joint>
<joint name="J2" type="revolute" lower="-179" upper="179" speed="180" acceleration="5000"><dh theta="0" d="0" a="400" alpha="0"/></joint>
</arm></cell>)");
  folder.write("path.xml",
               R"(<path version="1" name="stretching out" cell="cell.xml" speed="250" orientation="free">
  <!-- from the bend -->
  <waypoint id="A"> <joints>-34.7719440319486 93.58332169847198</joints> </waypoint>
  <waypoint id="B" move="linear"> <pose position=")" +
                   end + R"( 0 0"/> </waypoint>
</path>
)");
}

}  // namespace

TEST_CASE("retime: what is wrong with a call is told at once, by setup alone") {
  const auto problems = [](const Arguments& words) { return setup_retime(words).problems; };
  CHECK(problems({"p.xml", "--output", "o.xml"}).empty());
  CHECK(problems({"p.xml", "--by", "profile", "--profile", "t.csv"}).empty());
  CHECK(problems({"p.xml", "--output", "o.xml", "--by", "segment", "--reserve", "10", "--faster"}).empty());
  const auto one = [&](const Arguments& words) {
    const auto found = problems(words);
    return found.size() == 1 ? found[0] : std::to_string(found.size()) + " problems";
  };
  CHECK(one({"--output", "o.xml"}) == "no path file is named");
  CHECK(one({"a.xml", "b.xml", "--output", "o.xml"}) == "one path at a time is re-timed");
  CHECK(one({"p.xml"}) == "--output is missing");
  CHECK(one({"p.xml", "--by", "profile"}) == "--by profile needs --profile FILE");
  CHECK(one({"p.xml", "--output", "o.xml", "--by", "magic"}) ==
        "--by must be segment, stretch or profile, not 'magic'");
  CHECK(one({"p.xml", "--output", "o.xml", "--most-cuts", "-1"}) ==
        "--most-cuts must be a whole number from 0 to 100");
  CHECK(one({"p.xml", "--output", "o.xml", "--most-cuts", "3", "--by", "segment"}) ==
        "--most-cuts goes with --by stretch");
  CHECK(one({"p.xml", "--output", "o.xml", "--reserve", "100"}) ==
        "--reserve must be at least 0 and below 100 (percent)");
  CHECK(one({"p.xml", "--output", "o.xml", "--reserve", "x"}) == "--reserve: 'x' is not a number");
  CHECK(one({"p.xml", "--output", "-", "--json", "-"}) ==
        "only one output can go to standard output, not --output and --json");
  const auto ready = setup_retime({"p.xml", "--output", "o.xml", "--reserve", "10", "--most-cuts", "3"});
  CHECK(ready.settings.options.reserve == doctest::Approx(0.1));
  CHECK(ready.settings.options.most_cuts == 3);
  CHECK(setup_retime({"p.xml", "--output", "o.xml", "--by", "segment"}).settings.options.most_cuts == 0);
}

TEST_CASE("retime writes a path that the check finds clear") {
  const Folder folder;
  write_planar(folder);
  CHECK(run(folder, "pathvet check path.xml").status == 1);
  const Outcome outcome =
      run(folder, "pathvet retime path.xml --output held.xml --json account.json --profile table.csv");
  CHECK(outcome.status == 0);
  CHECK(outcome.err.empty());
  CHECK(outcome.out.rfind("CLEAR: stretching out, re-timed by stretch\n", 0) == 0);
  CHECK(outcome.out.find("Caution: ") != std::string::npos);
  CHECK(run(folder, "pathvet check held.xml").status == 0);
  const Json account = Json::parse(contents(folder / "account.json"));
  CHECK(account.at("format") == "pathvet-retiming");
  CHECK(account.at("verdict") == "clear");
  CHECK(!account.at("caution").get<std::string>().empty());
  CHECK(account.at("extra_waypoints").get<int>() > 0);
  CHECK(account.at("duration_s").get<double>() > account.at("duration_before_s").get<double>());
  CHECK(account.at("gap_percent").get<double>() < 5);
  CHECK(account.at("segments").at(0).at("stretches").back().at("joint") == "J2");
  CHECK(contents(folder / "table.csv")
            .rfind(
                "segment,fraction,time_s,tcp_speed,J1,J2,J1_speed,J2_speed,J1_acceleration,J2_acceleration\n",
                0) == 0);
}

TEST_CASE("retime by segment, into the input itself, quietly") {
  const Folder folder;
  write_planar(folder);
  std::string expected = contents(folder / "path.xml");
  const Outcome outcome = run(folder, "pathvet retime path.xml --output path.xml --by segment --quiet");
  CHECK(outcome.status == 0);
  CHECK(outcome.out.empty());
  const std::string now = contents(folder / "path.xml");
  CHECK(now != expected);
  expected.insert(expected.find("move=\"linear\"") + 13,
                  " speed=\"" + now.substr(now.find("\"linear\" speed=\"") + 16, 7) + "\"");
  CHECK(now == expected);
}

TEST_CASE(
    "retime: the cell can't be overwritten, an output can't be another input, and nothing is left behind") {
  const Folder folder;
  write_planar(folder);
  const long before = folder.entries();
  CHECK(run(folder, "pathvet retime path.xml --output cell.xml").status == 2);
  CHECK(run(folder, "pathvet retime path.xml --output out.xml --json path.xml").status == 2);
  CHECK(run(folder, "pathvet retime path.xml --output no/out.xml").status == 2);
  CHECK(run(folder, "pathvet retime gone.xml --output out.xml").status == 2);
  CHECK(run(folder, "pathvet retime path.xml --output path.xml --cell path.xml").status == 2);
  CHECK(folder.entries() == before);
}

TEST_CASE("retime: where no speed helps the status is 1, and the account says why") {
  const Folder folder;
  write_planar(folder, "1100");
  const Outcome outcome = run(folder, "pathvet retime path.xml --output out.xml --json -");
  CHECK(outcome.status == 1);
  const Json account = Json::parse(outcome.out);
  CHECK(account.at("verdict") == "flagged");
  CHECK(account.at("segments").at(0).at("outcome") == "left");
  CHECK(account.at("segments").at(0).at("reason").is_string());
  CHECK(contents(folder / "out.xml") == contents(folder / "path.xml"));
}

TEST_CASE("retime into another folder: the cell is named from there") {
  const Folder folder;
  write_planar(folder);
  CHECK(run(folder, "mkdir sub && pathvet retime path.xml --output sub/held.xml").status == 0);
  CHECK(contents(folder / "sub/held.xml").find("cell=\"../cell.xml\"") != std::string::npos);
  CHECK(run(folder, "pathvet check sub/held.xml").status == 0);
}

TEST_CASE("retime by profile alone writes the table and no path") {
  const Folder folder;
  write_planar(folder);
  const long before = folder.entries();
  const Outcome outcome = run(folder, "pathvet retime path.xml --by profile --profile table.csv");
  CHECK(outcome.status == 0);
  CHECK(outcome.out.find("time-optimal") != std::string::npos);
  CHECK(folder.entries() == before + 1);
}
