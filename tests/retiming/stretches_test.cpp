#include <algorithm>
#include <cmath>

#include <doctest/doctest.h>

#include "pathvet/retiming/stretches.hpp"
#include "retiming/best_partition.hpp"
#include "support/seed.hpp"

namespace pathvet {
namespace {

template <typename F>
Density density_of(F f, int points) {
  Density density;
  for (int i = 0; i <= points; ++i) {
    const double s = static_cast<double>(i) / points;
    density.add(s, f(s), 0);
  }
  return density;
}

double level(const Density& density, const Stretch& stretch) {
  return density.peak(stretch.begin, stretch.end).value;
}

TEST_CASE("one step up and down: two cuts, at the steps") {
  const Density density = density_of([](double s) { return s > 0.4 && s < 0.6 ? 5.0 : 0.0; }, 10000);
  StretchOptions options;
  options.floor = 1;
  const auto stretches = best_stretches(density, options);
  REQUIRE(stretches.size() == 3);
  CHECK(stretches[0].end == doctest::Approx(0.4).epsilon(1e-3));
  CHECK(stretches[1].end == doctest::Approx(0.6).epsilon(1e-3));
  CHECK(stretches[0].limit == -1);
  CHECK(stretches[1].density == 5);
  CHECK(total_time(stretches) == doctest::Approx(0.8 + 0.2 * 5).epsilon(2e-3));
}

TEST_CASE("a ramp: equal cuts are best, and their loss is known") {
  // max over pieces of a ramp 0..1 cut in n: sum of (i / n) / n = (n + 1) / (2 n).
  const Density density = density_of([](double s) { return s; }, 1000);
  for (int cuts : {0, 1, 3, 7}) {
    StretchOptions options;
    options.most_cuts = cuts;
    const double n = cuts + 1;
    CHECK(total_time(best_stretches(density, options)) == doctest::Approx((n + 1) / (2 * n)).epsilon(3e-3));
  }
  CHECK(density.integral(0) == doctest::Approx(0.5).epsilon(1e-12));
  CHECK(density.integral(0.5) == doctest::Approx(0.5 * 0.5 + 0.375).epsilon(1e-12));
}

TEST_CASE("random densities: as good as a dynamic programme over a fine grid") {
  test::Random random("stretches");
  for (int run = 0; run < 60; ++run) {
    // Peaks as near misses of singularities make them: h / (1 + ((s - c) / w)^2), widths over five decades.
    struct Peak {
      double height, centre, width;
    };
    std::vector<Peak> peaks;
    const int count = random.integer(1, 3);
    for (int i = 0; i < count; ++i) {
      const double width = std::pow(10, random.uniform(-5, -0.5));
      peaks.push_back({std::pow(10, random.uniform(0.2, 2.5)), random.uniform(0, 1), width});
    }
    std::vector<double> places;
    for (int i = 0; i <= 2000; ++i) places.push_back(i / 2000.0);
    for (const Peak& p : peaks) {
      for (int i = -400; i <= 400; ++i) {
        const double place = p.centre + p.width * std::sinh(i / 40.0) / 10;
        if (place > 0 && place < 1) places.push_back(place);
      }
    }
    std::ranges::sort(places);
    Density density;
    for (double s : places) {
      double value = 0;
      for (const Peak& p : peaks) value += p.height / (1 + std::pow((s - p.centre) / p.width, 2));
      density.add(s, value, 0);
    }
    StretchOptions options;
    options.floor = 1;
    options.most_cuts = random.integer(1, 8);
    const auto stretches = best_stretches(density, options);
    CHECK(static_cast<int>(stretches.size()) <= options.most_cuts + 1);
    for (const Stretch& s : stretches) CHECK(s.density >= level(density, s) * (1 - 1e-12));
    CAPTURE(run);
    CHECK(total_time(stretches) <= 1.01 * test::best_partition(density, options.floor, options.most_cuts));
    CHECK(total_time(stretches) >= density.integral(options.floor) * (1 - 1e-12));
  }
}

TEST_CASE("cuts keep to where they may be") {
  const Density density =
      density_of([](double s) { return 1 + 10 * std::exp(-std::pow((s - 0.5) / 0.05, 2)); }, 2000);
  StretchOptions options;
  options.floor = 1;
  options.first_cut = 0.45;
  options.last_cut = 0.52;
  for (const Stretch& s : best_stretches(density, options)) {
    CHECK((s.begin == 0 || (s.begin >= 0.45 && s.begin <= 0.52)));
  }
  options.first_cut = 0.6;
  options.last_cut = 0.4;
  CHECK(best_stretches(density, options).size() == 1);
}

}  // namespace
}  // namespace pathvet
