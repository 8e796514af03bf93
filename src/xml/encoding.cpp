#include <fmt/format.h>

#include <array>

#include "xml/characters.hpp"
#include "xml/wellformed.hpp"

namespace pathvet::xml {

std::optional<TextFault> find_bad_character(std::string_view text) {
  using namespace std::string_view_literals;
  constexpr std::array other_encodings{"\xFE\xFF"sv, "\xFF\xFE"sv,     "\0<"sv,
                                       "<\0"sv,      "\0\0\xFE\xFF"sv, "\0\0\0<"sv};
  for (const std::string_view begin : other_encodings) {
    if (text.starts_with(begin)) return TextFault{0, "the file is UTF-16 or UTF-32; expected UTF-8"};
  }
  for (std::size_t at = 0; at < text.size();) {
    const auto byte = static_cast<unsigned char>(text[at]);
    if (byte >= 0x20 && byte < 0x80) {
      ++at;
      continue;
    }
    const CodePoint c = decode(text, at);
    if (c.size == 0) return TextFault{at, fmt::format("byte 0x{:02X} is not UTF-8", byte)};
    if (!is_xml_character(c.value)) {
      return TextFault{at, fmt::format("character U+{:04X} is not allowed", static_cast<unsigned>(c.value))};
    }
    at += c.size;
  }
  return std::nullopt;
}

}  // namespace pathvet::xml
