#include "reporting/strip.hpp"

#include <algorithm>
#include <array>
#include <cmath>

namespace pathvet::reporting {
namespace {

constexpr int heights = 8;
constexpr std::array<const char*, heights> bars = {"▁", "▂", "▃", "▄", "▅", "▆", "▇", "█"};
constexpr std::array<const char*, heights> letters = {".", ":", "-", "=", "+", "*", "%", "#"};

const char* mark(double share, bool unicode) {
  if (!(share <= 1)) return "!";
  const int height = std::clamp(static_cast<int>(std::ceil(share * heights)) - 1, 0, heights - 1);
  return (unicode ? bars : letters)[static_cast<std::size_t>(height)];
}

}  // namespace

std::string strip(const std::vector<double>& profile, int columns, bool unicode) {
  std::string text;
  const std::size_t size = profile.size();
  const std::size_t count = std::min(static_cast<std::size_t>(std::max(columns, 1)), size);
  for (std::size_t c = 0; c < count; ++c) {
    const auto begin = profile.begin() + static_cast<std::ptrdiff_t>(c * size / count);
    const auto end = profile.begin() + static_cast<std::ptrdiff_t>((c + 1) * size / count);
    // Not max_element: a value that is no number has to win.
    double worst = 0;
    for (auto value = begin; value != end; ++value) {
      if (!(*value <= worst) && !std::isnan(worst)) worst = *value;
    }
    text += mark(worst, unicode);
  }
  return text;
}

}  // namespace pathvet::reporting
