#include "commands/signals.hpp"

#include <csignal>
#include <initializer_list>

namespace pathvet::commands {
namespace {

volatile std::sig_atomic_t stop_flag = 0;

extern "C" void ask_for_stop(int) {
  stop_flag = 1;
}

}  // namespace

void handle_signals() {
  std::signal(SIGPIPE, SIG_IGN);
  struct sigaction action {};
  action.sa_handler = ask_for_stop;
  action.sa_flags = static_cast<int>(SA_RESETHAND);
  for (int number : {SIGINT, SIGTERM, SIGHUP}) {
    struct sigaction before {};
    const bool is_ignored = sigaction(number, nullptr, &before) == 0 && before.sa_handler == SIG_IGN;
    if (!is_ignored) sigaction(number, &action, nullptr);
  }
}

bool stop_requested() {
  return stop_flag != 0;
}

}  // namespace pathvet::commands
