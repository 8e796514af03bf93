#include "commands/progress.hpp"

#include <fmt/format.h>
#include <unistd.h>

#include <algorithm>
#include <cstdio>

namespace pathvet::commands {
namespace {

using std::chrono::milliseconds;

constexpr milliseconds first_shown_after{500};
constexpr milliseconds shown_every{100};
constexpr int bar_columns = 30;

}  // namespace

ProgressBar::ProgressBar(bool wanted)
    : enabled_(wanted && ::isatty(STDERR_FILENO) == 1), next_(Clock::now() + first_shown_after) {}

ProgressBar::~ProgressBar() {
  if (drawn_) fmt::print(stderr, "\r\033[K");
}

void ProgressBar::show(double share) {
  share_ = share;
  if (!enabled_ || Clock::now() < next_) return;
  const int filled = static_cast<int>(std::clamp(share, 0.0, 1.0) * bar_columns);
  fmt::print(stderr, "\rchecking [{:#<{}}{:.<{}}] {:3.0f} %", "", filled, "", bar_columns - filled,
             100 * share);
  std::fflush(stderr);
  drawn_ = true;
  next_ = Clock::now() + shown_every;
}

}  // namespace pathvet::commands
