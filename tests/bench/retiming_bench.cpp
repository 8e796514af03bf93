// How long a time-optimal profile and a partition into stretches take.
#include <benchmark/benchmark.h>

#include <cmath>
#include <limits>

#include "pathvet/retiming/stretches.hpp"
#include "pathvet/retiming/time_optimal.hpp"

namespace {

pathvet::SpeedGrid six_axes(int intervals) {
  pathvet::SpeedGrid grid;
  grid.axes = 6;
  grid.speed.assign(6, 3.0);
  grid.acceleration.assign(6, 8.0);
  for (int i = 0; i <= intervals; ++i) {
    const double s = static_cast<double>(i) / intervals;
    grid.parameter.push_back(s);
    grid.ceiling.push_back(2.0);
    for (int k = 0; k < 6; ++k) {
      const double w = 3 + 2 * k;
      grid.first.push_back(w * std::cos(w * s + k));
      grid.second.push_back(-w * w * std::sin(w * s + k));
    }
  }
  return grid;
}

void time_optimal(benchmark::State& state) {
  const pathvet::SpeedGrid grid = six_axes(static_cast<int>(state.range(0)));
  for ([[maybe_unused]] auto _ : state)
    benchmark::DoNotOptimize(pathvet::time_optimal_speed(grid, true, true).duration());
  state.SetComplexityN(state.range(0));
}
BENCHMARK(time_optimal)
    ->RangeMultiplier(10)
    ->Range(1000, 100000)
    ->Complexity(benchmark::oN)
    ->Unit(benchmark::kMillisecond);

void stretches(benchmark::State& state) {
  pathvet::Density density;
  for (int i = 0; i <= 2000; ++i) {
    const double s = i / 2000.0;
    density.add(s, 40 / (1 + std::pow((s - 0.45) / 0.01, 2)), 0);
  }
  pathvet::StretchOptions options;
  options.floor = 1;
  for ([[maybe_unused]] auto _ : state)
    benchmark::DoNotOptimize(pathvet::total_time(pathvet::best_stretches(density, options)));
}
BENCHMARK(stretches)->Unit(benchmark::kMillisecond);

}  // namespace
