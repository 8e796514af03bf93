#include "commands/outputs.hpp"

#include <doctest/doctest.h>
#include <sys/stat.h>

#include <filesystem>

#include "commands/errors.hpp"
#include "commands/support.hpp"

using namespace pathvet::commands;
using pathvet::testing::contents;
using pathvet::testing::Folder;
namespace fs = std::filesystem;

TEST_CASE("a file appears whole, on commit") {
  const Folder folder;
  folder.write("out", "before");
  {
    Output output(folder / "out");
    output.stream() << std::string(200000, 'x');
    output.finish();
    CHECK(contents(folder / "out") == "before");
    output.commit();
  }
  CHECK(contents(folder / "out") == std::string(200000, 'x'));
  CHECK(folder.entries() == 1);
}

TEST_CASE("without commit nothing is left and nothing is touched") {
  const Folder folder;
  folder.write("out", "before");
  {
    Output output(folder / "out");
    output.stream() << "after";
  }
  { Output output(folder / "new"); }
  CHECK(contents(folder / "out") == "before");
  CHECK(folder.entries() == 1);
}

TEST_CASE("a link stays a link, permissions stay as they are") {
  const Folder folder;
  folder.write("real", "before");
  ::chmod((folder / "real").c_str(), 0640);
  fs::create_symlink("real", folder / "link");
  Output output(folder / "link");
  output.stream() << "after";
  output.finish();
  output.commit();
  CHECK(fs::is_symlink(folder / "link"));
  CHECK(contents(folder / "real") == "after");
  CHECK((fs::status(folder / "real").permissions() & fs::perms::all) == fs::perms(0640));
}

TEST_CASE("a new file has the permissions that any new file has") {
  const Folder folder;
  folder.write("other", "");
  Output output(folder / "new");
  output.finish();
  output.commit();
  CHECK(fs::status(folder / "new").permissions() == fs::status(folder / "other").permissions());
}

TEST_CASE("a full disk is told, and devices are left where they are") {
  Output output("/dev/full");
  output.stream() << "text";
  CHECK_THROWS_AS(output.finish(), OutputError);
  CHECK(fs::is_character_file("/dev/full"));
  Output nowhere("/dev/null");
  nowhere.stream() << "text";
  nowhere.finish();
  nowhere.commit();
  CHECK(fs::is_character_file("/dev/null"));
}

TEST_CASE("bad places for outputs") {
  const Folder folder;
  folder.write("input", "");
  folder.write("old", "");
  fs::create_hard_link(folder / "input", folder / "same");
  fs::create_directory(folder / "sub");
  const auto problem = [&folder](const std::string& target) {
    const auto found = output_problems({{"--json", target}}, {folder / "input"});
    return found.empty() ? std::string() : found[0];
  };
  CHECK(problem(folder / "new").empty());
  CHECK(problem(folder / "old").empty());
  CHECK(problem("-").empty());
  CHECK(problem(folder / "none/new") == "--json: there is no folder '" + folder / "none" + "'");
  CHECK(problem(folder / "sub") == "--json: '" + folder / "sub" + "' is a folder");
  CHECK(problem(folder / "input") == "--json: '" + folder / "input" + "' is an input file");
  CHECK(problem(folder / "sub/../input") == "--json: '" + folder / "sub/../input" + "' is an input file");
  CHECK(problem(folder / "same") == "--json: '" + folder / "same" + "' is an input file");
  CHECK(output_problems({{"--json", folder / "a"}, {"--trace", folder / "sub/../a"}}, {}).size() == 1);
  CHECK(output_problems({{"--json", folder / "sub"}, {"--trace", folder / "input"}}, {folder / "input"})
            .size() == 2);
}

TEST_CASE("inputs that can't be read") {
  const Folder folder;
  folder.write("here", "");
  CHECK(input_problems({folder / "here"}).empty());
  CHECK(input_problems({folder / "gone", folder.path().string()}) ==
        std::vector<std::string>{folder / "gone" + ":1:1: error: can't be read: No such file or directory",
                                 folder.path().string() + ":1:1: error: this is a folder; expected a file"});
}
