#pragma once

#include <optional>
#include <string>
#include <string_view>
#include <vector>

namespace pathvet::xml {

/// No number of a file may be larger: squares and products of two stay far from a double's range.
inline constexpr double greatest_number = 1e15;

/// What a number must be besides finite.
enum class Range { any, positive, not_negative };

/// Numbers as read from text, or what is wrong with it (then `values` means nothing).
struct Numbers {
  std::vector<double> values;
  std::string problem;  ///< empty: none
};

/// Decimal numbers separated by white space; a leading `+` is fine; `inf`, `nan` and hexadecimal are not.
[[nodiscard]] Numbers parse_numbers(std::string_view text);

/// Exactly one number, in `range`.
[[nodiscard]] Numbers parse_number(std::string_view text, Range range);

}  // namespace pathvet::xml
