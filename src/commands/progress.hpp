#pragma once

#include <chrono>

namespace pathvet::commands {

/// A bar on standard error, if that is a terminal and the work takes long enough to be waited for.
class ProgressBar {
 public:
  explicit ProgressBar(bool wanted);
  ~ProgressBar();
  ProgressBar(const ProgressBar&) = delete;
  ProgressBar& operator=(const ProgressBar&) = delete;

  void show(double share);
  /// Adds to the share shown last.
  void advance(double by) { show(share_ + by); }

 private:
  using Clock = std::chrono::steady_clock;

  bool enabled_;
  bool drawn_ = false;
  double share_ = 0;
  Clock::time_point next_;
};

}  // namespace pathvet::commands
