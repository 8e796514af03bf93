#include <fmt/format.h>

#include <cstdio>
#include <exception>
#include <new>

#include "commands/errors.hpp"
#include "commands/program.hpp"
#include "commands/signals.hpp"
#include "commands/terminal.hpp"

namespace {

using namespace pathvet::commands;

enum Status { wrong_input = 2, not_done = 3 };

void tell(const CallError& error) {
  const std::string name = error.command.empty() ? "pathvet" : "pathvet " + error.command;
  for (const std::string& problem : error.problems) {
    // A problem of a file says itself where it is.
    const bool has_place = problem.find(": error: ") != std::string::npos;
    fmt::print(stderr, "{}{}\n", has_place ? "" : name + ": ", problem);
  }
  fmt::print(stderr, "{} --help shows how it is called\n", name);
}

void tell(const InputError& error) {
  for (const pathvet::Fault& fault : error.faults) fmt::print(stderr, "{}\n", to_string(fault));
}

/// The exit status and the words for whatever ended the program early. Called while an exception is handled.
int end_early() {
  try {
    throw;
  } catch (const CallError& error) {
    tell(error);
    return wrong_input;
  } catch (const InputError& error) {
    tell(error);
    return wrong_input;
  } catch (const BrokenPipe&) {
    return not_done;
  } catch (const std::bad_alloc&) {
    std::fputs("pathvet: there is not enough memory\n", stderr);
  } catch (const std::exception& error) {
    fmt::print(stderr, "pathvet: {}\n", error.what());
  }
  return not_done;
}

}  // namespace

int main(int count, char** words) {
  keep_standard_streams();
  handle_signals();
  try {
    return run_program(Arguments(words + (count > 0 ? 1 : 0), words + count));
  } catch (...) {
    return end_early();
  }
}
