#pragma once

#include <exception>
#include <mutex>
#include <thread>
#include <vector>

namespace pathvet::commands {

/// Runs `work` on `threads` threads at once, this one among them, and waits for all. The first exception that
/// any of them throws is thrown here.
template <typename Work>
void in_parallel(int threads, const Work& work) {
  std::exception_ptr failure;
  std::mutex mutex;
  const auto guarded = [&] {
    try {
      work();
    } catch (...) {
      const std::lock_guard lock(mutex);
      if (!failure) failure = std::current_exception();
    }
  };
  {
    std::vector<std::jthread> others;
    for (int i = 1; i < threads; ++i) others.emplace_back(guarded);
    guarded();
  }
  if (failure) std::rethrow_exception(failure);
}

}  // namespace pathvet::commands
