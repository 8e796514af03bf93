#include "commands/program.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <array>

#include "commands/check.hpp"
#include "commands/compare.hpp"
#include "commands/errors.hpp"
#include "commands/outputs.hpp"
#include "commands/pose.hpp"
#include "commands/retime.hpp"
#include "commands/starts.hpp"

namespace pathvet::commands {
namespace {

void say(const std::string& text) {
  Output out("-");
  out.stream() << text;
  out.finish();
}

/// Setup, then all that is wrong with the call at once, then the work.
template <auto setup, auto help, auto run>
int run_command(const char* name, const Arguments& arguments) {
  auto ready = setup(arguments);
  if (ready.wants_help) {
    say(help());
    return 0;
  }
  const std::vector<std::string> more = file_problems(ready.settings);
  ready.problems.insert(ready.problems.end(), more.begin(), more.end());
  if (!ready.problems.empty()) throw CallError(name, std::move(ready.problems));
  return run(ready.settings);
}

struct Command {
  const char* name;
  const char* summary;
  int (*run)(const char* name, const Arguments& arguments);
};

constexpr std::array<Command, 5> commands = {{
    {"check", "check paths: the main job", run_command<setup_check, check_help, run_check>},
    {"compare", "what a change fixed, brought or left",
     run_command<setup_compare, compare_help, run_compare>},
    {"pose", "one pose or configuration", run_command<setup_pose, pose_help, run_pose>},
    {"retime", "the same path at speeds that hold", run_command<setup_retime, retime_help, run_retime>},
    {"starts", "every start configuration, best first", run_command<setup_starts, starts_help, run_starts>},
}};

std::string program_help() {
  std::string text = "Usage: pathvet COMMAND [options]\n\nVets robot paths offline. Commands:\n";
  for (const Command& command : commands) text += fmt::format("  {:8}{}\n", command.name, command.summary);
  text += "\n  pathvet COMMAND --help    the options of a command\n  pathvet --version         the version\n";
  return text;
}

}  // namespace

int run_program(const Arguments& arguments) {
  if (arguments.empty()) throw CallError("", {"no command is given"});
  const std::string& word = arguments[0];
  if (word == "--help" || word == "--version") {
    say(word == "--help" ? program_help() : fmt::format("pathvet {}\n", PATHVET_VERSION));
    return 0;
  }
  const auto command =
      std::ranges::find_if(commands, [&word](const Command& one) { return word == one.name; });
  if (command == commands.end()) throw CallError("", {fmt::format("there is no command '{}'", word)});
  return command->run(command->name, Arguments(arguments.begin() + 1, arguments.end()));
}

}  // namespace pathvet::commands
