#include "commands/terminal.hpp"

#include <fcntl.h>
#include <sys/ioctl.h>
#include <unistd.h>

#include <charconv>
#include <cstdlib>
#include <string>
#include <string_view>

namespace pathvet::commands {
namespace {

std::string_view environment(const char* name) {
  const char* value = std::getenv(name);
  return value ? value : "";
}

int terminal_width() {
  constexpr int default_width = 80;
  const std::string_view columns = environment("COLUMNS");
  int width = 0;
  std::from_chars(columns.data(), columns.data() + columns.size(), width);
  if (width > 0) return width;
  winsize size{};
  if (::ioctl(STDOUT_FILENO, TIOCGWINSZ, &size) == 0 && size.ws_col > 0) return size.ws_col;
  return default_width;
}

bool is_utf8() {
  for (const char* name : {"LC_ALL", "LC_CTYPE", "LANG"}) {
    const std::string_view locale = environment(name);
    if (locale.empty()) continue;
    return locale.find("UTF-8") != std::string_view::npos || locale.find("utf8") != std::string_view::npos;
  }
  return false;
}

}  // namespace

TextStyle style_of_standard_output() {
  TextStyle style;
  style.width = terminal_width();
  style.colour =
      ::isatty(STDOUT_FILENO) == 1 && environment("NO_COLOR").empty() && environment("TERM") != "dumb";
  style.unicode = is_utf8();
  return style;
}

void keep_standard_streams() {
  for (int descriptor = STDIN_FILENO; descriptor <= STDERR_FILENO; ++descriptor) {
    // Opened for reading alone: what is written to a closed stream has to fail, not vanish.
    if (::fcntl(descriptor, F_GETFD) < 0 && ::open("/dev/null", O_RDONLY) < 0) std::abort();
  }
}

}  // namespace pathvet::commands
