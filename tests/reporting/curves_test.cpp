#include "pathvet/reporting/curves.hpp"

#include <doctest/doctest.h>

#include <algorithm>
#include <cmath>

#include "support/seed.hpp"

namespace pathvet {
namespace {

CurveRow row_at(int index, std::vector<double> values) {
  return {1 + index / 1000, (index % 1000) / 1000.0, 0, 0.001 * index, std::move(values), Vector3::Zero()};
}

int index_of(const CurveRow& row) {
  return static_cast<int>(std::lround(1000 * row.time));
}

TEST_CASE("few rows all stay") {
  CurveThinner thinner(500);
  for (int i = 0; i < 400; ++i) thinner.add(row_at(i, {std::sin(0.1 * i)}));
  CHECK(thinner.take().size() == 400);
  CHECK(thinner.take().empty());
}

TEST_CASE("of many rows every spike stays, up or down, in any value") {
  test::Random random("curves: spikes");
  constexpr int count = 200'000;
  constexpr int values = 5;
  constexpr std::size_t most = 4000;
  // One spike in each stretch of 2000 rows, so far apart that no two share a bucket's value by chance alone.
  std::vector<std::pair<int, int>> spikes;
  for (int begin = 0; begin < count; begin += 2000) {
    spikes.emplace_back(begin + random.integer(0, 1999), random.integer(0, values - 1));
  }
  CurveThinner thinner(most);
  std::size_t next = 0;
  for (int i = 0; i < count; ++i) {
    std::vector<double> here;
    for (int k = 0; k < values; ++k) here.push_back(random.uniform(-1, 1));
    if (next < spikes.size() && spikes[next].first == i) {
      here[static_cast<std::size_t>(spikes[next].second)] = next % 2 == 0 ? 10 : -10;
      ++next;
    }
    thinner.add(row_at(i, here));
  }
  const std::vector<CurveRow> kept = thinner.take();
  CHECK(kept.size() <= most + 64);
  CHECK(kept.size() > most / 4);
  CHECK(index_of(kept.front()) == 0);
  CHECK(index_of(kept.back()) == count - 1);
  CHECK(std::ranges::is_sorted(kept, {}, index_of));
  for (const auto& [index, value] : spikes) {
    CAPTURE(index);
    CHECK(std::ranges::any_of(kept, [index](const CurveRow& row) { return index_of(row) == index; }));
  }
}

TEST_CASE("a row without values is neither least nor greatest, and late rows find their place") {
  CurveThinner thinner(200);
  for (int i = 0; i < 1000; ++i) {
    const int late = i % 10 == 3 ? i + 1 : i % 10 == 4 ? i - 1 : i;  // two in ten come the wrong way round
    thinner.add(row_at(late, {late == 500 ? 7.0 : std::nan("")}));
  }
  const std::vector<CurveRow> kept = thinner.take();
  CHECK(kept.size() < 200);
  CHECK(std::ranges::is_sorted(kept, {}, index_of));
  CHECK(std::ranges::any_of(kept, [](const CurveRow& row) { return row.values.front() == 7.0; }));
}

}  // namespace
}  // namespace pathvet
