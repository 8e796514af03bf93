#pragma once

#include "commands/options.hpp"

namespace pathvet::commands {

/// The whole program but for what main.cpp catches. arguments: the words after the program's name.
[[nodiscard]] int run_program(const Arguments& arguments);

}  // namespace pathvet::commands
