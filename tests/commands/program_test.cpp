#include <doctest/doctest.h>

#include <nlohmann/json.hpp>

#include "commands/support.hpp"

using pathvet::testing::contents;
using pathvet::testing::Folder;
using pathvet::testing::Outcome;
using pathvet::testing::run;
using pathvet::testing::write_small_cell;
using Json = nlohmann::json;

TEST_CASE("help and version go to standard output") {
  const Folder folder;
  for (const char* line : {"pathvet --help", "pathvet check --help", "pathvet pose --help"}) {
    const Outcome outcome = run(folder, line);
    CHECK(outcome.status == 0);
    CHECK(outcome.out.rfind("Usage: pathvet ", 0) == 0);
    CHECK(outcome.err.empty());
  }
  CHECK(run(folder, "pathvet --version").out == "pathvet " PATHVET_VERSION "\n");
}

TEST_CASE("a wrong call: status 2, everything on standard error") {
  const Folder folder;
  write_small_cell(folder);
  const Outcome none = run(folder, "pathvet");
  CHECK(none.status == 2);
  CHECK(none.err == "pathvet: no command is given\npathvet --help shows how it is called\n");
  CHECK(run(folder, "pathvet vet path.xml").err ==
        "pathvet: there is no command 'vet'\npathvet --help shows how it is called\n");
  const Outcome many = run(folder, "pathvet check path.xml gone.xml --json no/r.json --step-mm 0 --nope");
  CHECK(many.status == 2);
  CHECK(many.out.empty());
  CHECK(many.err ==
        "pathvet check: unknown option --nope\n"
        "pathvet check: --step-mm must be at least 0.000001 (mm)\n"
        "pathvet check: --json: there is no folder 'no'\n"
        "gone.xml:1:1: error: can't be read: No such file or directory\n"
        "pathvet check --help shows how it is called\n");
}

TEST_CASE("an output that is the cell of the path is found before any work") {
  const Folder folder;
  write_small_cell(folder);
  const std::string before = contents(folder / "cell.xml");
  const Outcome outcome = run(folder, "pathvet check path.xml --json cell.xml");
  CHECK(outcome.status == 2);
  CHECK(outcome.err.rfind("pathvet check: --json: 'cell.xml' is an input file\n", 0) == 0);
  CHECK(contents(folder / "cell.xml") == before);
}

TEST_CASE("a wrong input: every fault with its place, no output touched") {
  const Folder folder;
  write_small_cell(folder);
  folder.write("path.xml", "<path version=\"1\" cell=\"cell.xml\" speed=\"x\">\n  <waypoint/>\n</path>\n");
  folder.write("r.json", "before");
  const Outcome outcome = run(folder, "pathvet check path.xml --json r.json --trace t.csv");
  CHECK(outcome.status == 2);
  CHECK(outcome.out.empty());
  CHECK(outcome.err.find("path.xml:1:") != std::string::npos);
  CHECK(outcome.err.find("path.xml:2:") != std::string::npos);
  CHECK(contents(folder / "r.json") == "before");
  CHECK(folder.entries() == 3);
}

TEST_CASE("a clear path: status 0, text and files") {
  const Folder folder;
  write_small_cell(folder);
  const Outcome outcome = run(folder, "pathvet check path.xml --json r.json --trace t.csv");
  CHECK(outcome.status == 0);
  CHECK(outcome.err.empty());
  CHECK(outcome.out.rfind("CLEAR: bracket: nothing found\n", 0) == 0);
  CHECK(outcome.out.find("Caution: pathvet looks at kinematics alone") != std::string::npos);
  CHECK(Json::parse(contents(folder / "r.json"))["verdict"] == "clear");
  CHECK(contents(folder / "t.csv")
            .rfind("segment,fraction,length_mm,time_s,J1,J2,J3,J1_speed,J2_speed,J3_speed,", 0) == 0);
  CHECK(folder.entries() == 4);
}

TEST_CASE("a flagged path: status 1, and --quiet and - say nothing else") {
  const Folder folder;
  write_small_cell(folder, "175");
  CHECK(run(folder, "pathvet check path.xml").status == 1);
  const Outcome quiet = run(folder, "pathvet check path.xml --quiet --json r.json");
  CHECK(quiet.status == 1);
  CHECK(quiet.out.empty());
  CHECK(quiet.err.empty());
  const Outcome json = run(folder, "pathvet check path.xml --json -");
  CHECK(json.status == 1);
  CHECK(json.out == contents(folder / "r.json"));
  const Json report = Json::parse(json.out);
  CHECK(report["paths"][0]["findings"][0]["code"] == "joint-limit");
  CHECK(report["paths"][0]["findings"][0]["joint"] == "J1");
}

TEST_CASE("warnings count with --strict") {
  const Folder folder;
  write_small_cell(folder, "168");
  CHECK(run(folder, "pathvet check path.xml").status == 0);
  CHECK(run(folder, "pathvet check path.xml --strict").status == 1);
  CHECK(run(folder, "pathvet check path.xml --strict --limit-margin 1").status == 0);
}

TEST_CASE("several paths make one report") {
  const Folder folder;
  write_small_cell(folder, "175");
  folder.write("other.xml", contents(folder / "path.xml"));
  const Outcome outcome = run(folder, "pathvet check path.xml other.xml --json r.json");
  CHECK(outcome.status == 1);
  CHECK(outcome.out.rfind("FLAGGED: 2 of 2 paths flagged", 0) == 0);
  CHECK(Json::parse(contents(folder / "r.json"))["paths"].size() == 2);
}

TEST_CASE("what can't be written: status 3, one line, nothing half done") {
  const Folder folder;
  write_small_cell(folder);
  Outcome outcome = run(folder, "pathvet check path.xml --json /dev/full --trace t.csv");
  CHECK(outcome.status == 3);
  CHECK(outcome.err == "pathvet: can't write '/dev/full': No space left on device\n");
  CHECK(folder.entries() == 2);
  outcome = run(folder, "pathvet check path.xml >/dev/full");
  CHECK(outcome.status == 3);
  CHECK(outcome.err == "pathvet: can't write standard output: No space left on device\n");
  outcome = run(folder, "pathvet check path.xml >&-");
  CHECK(outcome.status == 3);
  CHECK(outcome.err == "pathvet: can't write standard output: Bad file descriptor\n");
}

TEST_CASE("a reader that goes away ends the program quietly with status 3") {
  const Folder folder;
  write_small_cell(folder);
  const Outcome outcome = run(folder, "{ pathvet check path.xml; echo $? >status; } | true");
  CHECK(outcome.err.empty());
  // The pipe may still be open when the little text is written; with a closed one the status is 3.
  const Outcome closed = run(folder,
                             "mkfifo pipe; { exec 3<pipe; exec 3<&-; } & exec 4>pipe; wait; pathvet check "
                             "path.xml >&4");
  CHECK(closed.status == 3);
  CHECK(closed.err.empty());
}

TEST_CASE("a signal stops the check: status 3, one line, nothing half done") {
  const Folder folder;
  write_small_cell(folder);
  std::string path =
      "<path version=\"1\" cell=\"cell.xml\" orientation=\"free\" speed=\"100\">\n"
      "<waypoint id=\"w0\"> <joints>0 30 -60</joints> </waypoint>\n";
  for (int i = 1; i <= 2000; ++i) {
    path += "<waypoint id=\"w" + std::to_string(i) + "\" move=\"linear\"> <pose position=\"700 " +
            (i % 2 ? "100" : "-100") + " 500\"/> </waypoint>\n";
  }
  folder.write("long.xml", path + "</path>\n");
  // Far too fine for the second that it gets; SIGTERM, as a shell's background jobs ignore SIGINT.
  const Outcome outcome =
      run(folder,
          "$program check long.xml --step-mm 0.0001 --json r.json --trace t.csv & sleep 0.5; "
          "kill $!; wait $!");
  CHECK(outcome.status == 3);
  CHECK(outcome.out.empty());
  CHECK(outcome.err == "pathvet: stopped; nothing was written\n");
  CHECK(folder.entries() == 3);
}

TEST_CASE("pose: from joints to the pose and back") {
  const Folder folder;
  write_small_cell(folder);
  const Outcome there = run(folder, "pathvet pose --cell cell.xml --joints '-10 30 -60' --json -");
  CHECK(there.status == 0);
  const Json pose = Json::parse(there.out);
  std::string position, quaternion;
  for (double x : pose["position"]) position += std::to_string(x) + ' ';
  for (double x : pose["quaternion"]) quaternion += std::to_string(x) + ' ';
  const Outcome back = run(folder, "pathvet pose --cell cell.xml --orientation free --json - --position '" +
                                       position + "' --quaternion '" + quaternion + "'");
  CHECK(back.status == 0);
  const Json answer = Json::parse(back.out);
  bool found = false;
  for (const Json& solution : answer["solutions"]) {
    const Json& q = solution["joints"];
    found = found || (std::abs(q[0].get<double>() + 10) < 1e-4 && std::abs(q[1].get<double>() - 30) < 1e-4 &&
                      std::abs(q[2].get<double>() + 60) < 1e-4);
  }
  CHECK(found);
}

TEST_CASE("pose in a frame, and names that the cell doesn't have") {
  const Folder folder;
  write_small_cell(folder);
  const Json world = Json::parse(run(folder, "pathvet pose --cell cell.xml --joints '0 0 0' --json -").out);
  const Json table =
      Json::parse(run(folder, "pathvet pose --cell cell.xml --joints '0 0 0' --frame table --json -").out);
  CHECK(world["position"][0].get<double>() - table["position"][0].get<double>() == doctest::Approx(300));
  const Outcome wrong = run(folder, "pathvet pose --cell cell.xml --tool pen --frame desk --joints '1 2'");
  CHECK(wrong.status == 2);
  CHECK(wrong.err ==
        "pathvet pose: --tool 'pen' is not in the cell; it has 'pin'\n"
        "pathvet pose: --frame 'desk' is not in the cell; it has 'table'\n"
        "pathvet pose: --joints has 2 values; the arm has 3 joints (J1, J2, J3)\n"
        "pathvet pose --help shows how it is called\n");
}

TEST_CASE("pose on a pose out of reach answers with no configuration") {
  const Folder folder;
  write_small_cell(folder);
  const Outcome outcome =
      run(folder, "pathvet pose --cell cell.xml --position '9000 0 0' --orientation free --json r.json");
  CHECK(outcome.status == 0);
  CHECK(outcome.out.find("0 configurations") != std::string::npos);
  CHECK(Json::parse(contents(folder / "r.json"))["solutions"].empty());
}
