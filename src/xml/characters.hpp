#pragma once

#include <cstddef>
#include <string_view>

namespace pathvet::xml {

struct CodePoint {
  char32_t value = 0;
  std::size_t size = 0;  ///< bytes; 0 where the bytes are not UTF-8
};

/// The code point that begins at `offset`, which must lie inside `text`. Overlong forms, surrogates and
/// values above U+10FFFF are not UTF-8 (RFC 3629, section 3).
[[nodiscard]] CodePoint decode(std::string_view text, std::size_t offset);

/// Productions of XML 1.0 (fifth edition): [3] S, [2] Char, [4] NameStartChar, [4a] NameChar.
[[nodiscard]] constexpr bool is_space(char c) {
  return c == ' ' || c == '\t' || c == '\n' || c == '\r';
}
[[nodiscard]] bool is_xml_character(char32_t c);
[[nodiscard]] bool is_name_start(char32_t c);
[[nodiscard]] bool is_name_character(char32_t c);

}  // namespace pathvet::xml
