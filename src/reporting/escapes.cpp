#include "reporting/escapes.hpp"

#include <algorithm>
#include <array>

#include "reporting/json_values.hpp"

namespace pathvet::reporting {
namespace {

constexpr std::string_view replacement = "\xEF\xBF\xBD";

bool begins_formula(std::string_view text) {
  // The last four: the wide forms of = + - @, which some spreadsheets take for the same.
  constexpr std::array<std::string_view, 10> starts = {
      "=", "+", "-", "@", "\t", "\r", "\xEF\xBC\x9D", "\xEF\xBC\x8B", "\xEF\xBC\x8D", "\xEF\xBC\xA0"};
  return std::ranges::any_of(starts, [text](std::string_view start) { return text.starts_with(start); });
}

bool is_plain_in_uri(char letter) {
  constexpr std::string_view others = "-._~/";
  return (letter >= 'a' && letter <= 'z') || (letter >= 'A' && letter <= 'Z') ||
         (letter >= '0' && letter <= '9') || others.find(letter) != std::string_view::npos;
}

}  // namespace

std::string valid_utf8(const std::string& text) {
  const std::string json = Json(text).dump(-1, ' ', false, Json::error_handler_t::replace);
  return Json::parse(json).get<std::string>();
}

std::string xml_escaped(const std::string& text) {
  const std::string valid = valid_utf8(text);
  std::string out;
  for (std::size_t i = 0; i < valid.size(); ++i) {
    const char letter = valid[i];
    const std::string_view three = std::string_view(valid).substr(i, 3);
    if (letter == '&') {
      out += "&amp;";
    } else if (letter == '<') {
      out += "&lt;";
    } else if (letter == '>') {
      out += "&gt;";
    } else if (letter == '"') {
      out += "&quot;";
    } else if (letter == '\n') {
      out += "&#10;";
    } else if (letter == '\r') {
      out += "&#13;";
    } else if (letter == '\t') {
      out += "&#9;";
    } else if (static_cast<unsigned char>(letter) < 0x20) {
      out += replacement;
    } else if (three == "\xEF\xBF\xBE" || three == "\xEF\xBF\xBF") {
      out += replacement;
      i += 2;
    } else {
      out += letter;
    }
  }
  return out;
}

std::string csv_text(const std::string& text) {
  const std::string safe = (begins_formula(text) ? "'" : "") + valid_utf8(text);
  if (safe.find_first_of(",\"\r\n") == std::string::npos) return safe;
  std::string out = "\"";
  for (char letter : safe) {
    if (letter == '"') out += '"';
    out += letter;
  }
  return out + '"';
}

std::string uri_of_file(std::string_view file) {
  constexpr std::string_view digits = "0123456789ABCDEF";
  std::string out = file.starts_with("/") ? "file://" : "";
  for (char letter : file) {
    if (is_plain_in_uri(letter)) {
      out += letter;
    } else {
      const auto byte = static_cast<unsigned char>(letter);
      out += {'%', digits[byte >> 4U], digits[byte & 15U]};
    }
  }
  return out;
}

}  // namespace pathvet::reporting
