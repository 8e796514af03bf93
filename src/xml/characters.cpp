#include "xml/characters.hpp"

#include <algorithm>
#include <array>

namespace pathvet::xml {
namespace {

struct Range {
  char32_t first;
  char32_t last;
};

constexpr std::array<Range, 12> name_start_ranges{{{0xC0, 0xD6},
                                                   {0xD8, 0xF6},
                                                   {0xF8, 0x2FF},
                                                   {0x370, 0x37D},
                                                   {0x37F, 0x1FFF},
                                                   {0x200C, 0x200D},
                                                   {0x2070, 0x218F},
                                                   {0x2C00, 0x2FEF},
                                                   {0x3001, 0xD7FF},
                                                   {0xF900, 0xFDCF},
                                                   {0xFDF0, 0xFFFD},
                                                   {0x10000, 0xEFFFF}}};

constexpr std::array<Range, 5> name_further_ranges{
    {{U'-', U'.'}, {U'0', U'9'}, {0xB7, 0xB7}, {0x300, 0x36F}, {0x203F, 0x2040}}};

template <std::size_t size>
bool contains(const std::array<Range, size>& ranges, char32_t c) {
  return std::any_of(ranges.begin(), ranges.end(),
                     [c](const Range& range) { return range.first <= c && c <= range.last; });
}

/// Bytes of the sequence that `lead` opens; 0 where no sequence begins with it.
std::size_t sequence_size(unsigned char lead) {
  if (lead >= 0xC2 && lead <= 0xDF) return 2;
  if (lead >= 0xE0 && lead <= 0xEF) return 3;
  if (lead >= 0xF0 && lead <= 0xF4) return 4;
  return 0;
}

}  // namespace

CodePoint decode(std::string_view text, std::size_t offset) {
  constexpr std::array<char32_t, 5> lead_bits{0, 0x7F, 0x1F, 0x0F, 0x07};
  constexpr std::array<char32_t, 5> smallest{0, 0, 0x80, 0x800, 0x10000};
  const auto byte = [&](std::size_t i) { return static_cast<unsigned char>(text[offset + i]); };
  if (byte(0) < 0x80) return {byte(0), 1};
  const std::size_t size = sequence_size(byte(0));
  if (size == 0 || text.size() - offset < size) return {};
  char32_t value = byte(0) & lead_bits[size];
  for (std::size_t i = 1; i < size; ++i) {
    if ((byte(i) & 0xC0) != 0x80) return {};
    value = (value << 6) | (byte(i) & 0x3F);
  }
  const bool surrogate = value >= 0xD800 && value <= 0xDFFF;
  if (value < smallest[size] || surrogate || value > 0x10FFFF) return {};
  return {value, size};
}

bool is_xml_character(char32_t c) {
  if (c < 0x20) return c == '\t' || c == '\n' || c == '\r';
  return c <= 0xD7FF || (c >= 0xE000 && c <= 0xFFFD) || (c >= 0x10000 && c <= 0x10FFFF);
}

bool is_name_start(char32_t c) {
  if (c < 0x80) return ((c | 0x20) >= U'a' && (c | 0x20) <= U'z') || c == U'_' || c == U':';
  return contains(name_start_ranges, c);
}

bool is_name_character(char32_t c) {
  return is_name_start(c) || contains(name_further_ranges, c);
}

}  // namespace pathvet::xml
