#pragma once

#include <cstddef>
#include <optional>
#include <string>
#include <string_view>

namespace pathvet::xml {

/// Bounds of what is read at all; far above what any cell or path needs.
inline constexpr std::size_t max_depth = 64;       ///< nested elements
inline constexpr std::size_t max_attributes = 64;  ///< of one element

struct TextFault {
  std::size_t offset = 0;  ///< bytes
  std::string what;
};

/// The first byte that is no UTF-8, or no character that XML 1.0 allows.
[[nodiscard]] std::optional<TextFault> find_bad_character(std::string_view text);

/// The first place where `text` (UTF-8, without byte order mark) breaks a rule of XML 1.0 (fifth edition), or
/// one of the bounds above, or has a DOCTYPE. Nothing is left for the parser behind it to be lenient about.
[[nodiscard]] std::optional<TextFault> find_ill_formed(std::string_view text);

}  // namespace pathvet::xml
