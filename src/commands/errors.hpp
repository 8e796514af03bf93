#pragma once

#include <stdexcept>
#include <string>
#include <vector>

#include "pathvet/xml/faults.hpp"

/// Why a command ends early. Only main.cpp catches; it knows the exit status and the words of each.
namespace pathvet::commands {

/// The call is wrong: everything that is, one line each.
struct CallError : std::runtime_error {
  CallError(std::string name, std::vector<std::string> lines)
      : std::runtime_error("wrong call"), command(std::move(name)), problems(std::move(lines)) {}
  std::string command;
  std::vector<std::string> problems;
};

/// Input files are wrong.
struct InputError : std::runtime_error {
  explicit InputError(std::vector<Fault> found)
      : std::runtime_error("wrong input"), faults(std::move(found)) {}
  std::vector<Fault> faults;
};

/// An output could not be written.
struct OutputError : std::runtime_error {
  using std::runtime_error::runtime_error;
};

/// Whoever read standard output has gone: nobody is left to tell.
struct BrokenPipe : std::runtime_error {
  BrokenPipe() : std::runtime_error("broken pipe") {}
};

/// Stopped by a signal.
struct Stopped : std::runtime_error {
  Stopped() : std::runtime_error("stopped; nothing was written") {}
};

}  // namespace pathvet::commands
