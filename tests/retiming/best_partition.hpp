#pragma once

#include <algorithm>
#include <cmath>
#include <limits>
#include <vector>

#include "pathvet/retiming/stretches.hpp"

namespace pathvet::test {

/// The least time of any partition into at most cuts + 1 stretches whose cuts are points of the density
/// (thinned where neighbours are alike): written apart from the library's, to hold it against.
inline double best_partition(const Density& density, double floor, int cuts) {
  std::vector<double> at, cell;  // places, and the greatest density up to the next one
  for (std::size_t i = 0; i < density.fraction.size(); ++i) {
    const double here = std::max(floor, density.value[i]);
    const double s = density.fraction[i];
    const bool ends = i == 0 || i + 1 == density.fraction.size();
    if (!cell.empty()) cell.back() = std::max(cell.back(), here);
    const bool near = !at.empty() && s - at.back() < 2e-3 &&
                      std::abs(std::max(floor, density.value[i]) /
                                   std::max(floor, density.peak(at.back(), at.back()).value) -
                               1) < 0.01;
    if (!ends && (near || s <= at.back())) continue;
    at.push_back(s);
    cell.push_back(here);
  }
  const std::size_t n = at.size();
  std::vector<double> best(n, std::numeric_limits<double>::infinity());
  best[0] = 0;
  for (int k = 0; k <= cuts; ++k) {
    std::vector<double> next = best;
    for (std::size_t j = 1; j < n; ++j) {
      double level = 0;
      for (std::size_t i = j; i-- > 0;) {
        level = std::max(level, cell[i]);
        next[j] = std::min(next[j], best[i] + (at[j] - at[i]) * level);
      }
    }
    best.swap(next);
  }
  return best[n - 1];
}

}  // namespace pathvet::test
