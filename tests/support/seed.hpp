#pragma once

#include <cstdint>
#include <cstdlib>
#include <random>
#include <string_view>

#include <doctest/doctest.h>

namespace pathvet::test {

/// Random numbers of one test: seeded from the test's name, or from the environment variable PATHVET_SEED.
/// The seed is printed, so that a failure can be had again.
class Random {
 public:
  explicit Random(std::string_view test) {
    std::uint64_t seed = 14695981039346656037ULL;  // FNV-1a over the name
    for (const char c : test) seed = (seed ^ static_cast<unsigned char>(c)) * 1099511628211ULL;
    if (const char* wanted = std::getenv("PATHVET_SEED")) seed = std::strtoull(wanted, nullptr, 10);
    MESSAGE("seed ", seed);
    engine_.seed(seed);
  }

  double uniform(double low, double high) {
    return std::uniform_real_distribution<double>(low, high)(engine_);
  }
  int integer(int low, int high) { return std::uniform_int_distribution<int>(low, high)(engine_); }
  double normal() { return std::normal_distribution<double>()(engine_); }
  bool chance(double share) { return uniform(0, 1) < share; }

 private:
  std::mt19937_64 engine_;
};

}  // namespace pathvet::test
