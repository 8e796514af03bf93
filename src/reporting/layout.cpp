#include "reporting/layout.hpp"

#include <algorithm>
#include <array>
#include <ostream>

namespace pathvet::reporting {
namespace {

constexpr int least_width = 40;  // below this, wrapping makes nothing easier to read
constexpr int gap = 2;           // between columns

int usable(const TextStyle& style) {
  return std::max(style.width, least_width);
}

bool starts_character(char byte) {
  return (static_cast<unsigned char>(byte) & 0xC0U) != 0x80U;
}

std::string printable(std::string_view text) {
  std::string out(text);
  for (char& letter : out) {
    const auto code = static_cast<unsigned char>(letter);
    if ((code < 0x20U && letter != '\n') || code == 0x7FU) letter = '?';
  }
  return out;
}

/// Takes the first `columns` characters off `text`.
std::string take(std::string_view& text, int columns) {
  std::size_t end = 0;
  for (int seen = 0; end < text.size(); ++end) {
    if (starts_character(text[end]) && seen++ == columns) break;
  }
  std::string taken(text.substr(0, end));
  text.remove_prefix(end);
  return taken;
}

void wrap_line(std::string_view text, int width, std::vector<std::string>& lines) {
  std::string line;
  while (!text.empty()) {
    const std::size_t end = std::min(text.find(' '), text.size());
    std::string_view word = text.substr(0, end);
    text.remove_prefix(std::min(end + 1, text.size()));
    if (!line.empty() && width_of(line) + 1 + width_of(word) > width) {
      lines.push_back(std::move(line));
      line.clear();
    }
    while (line.empty() && width_of(word) > width) lines.push_back(take(word, width));
    if (!line.empty()) line += ' ';
    line += word;
  }
  lines.push_back(std::move(line));
}

/// What each column would like, cut down evenly from the widest until the whole fits.
std::vector<int> shared_widths(std::vector<int> wanted, int room) {
  const auto sum = [&wanted] {
    int total = 0;
    for (int width : wanted) total += width;
    return total;
  };
  for (int excess = sum() - room; excess > 0; --excess) {
    int& widest = *std::ranges::max_element(wanted);
    if (widest <= 1) break;
    --widest;
  }
  return wanted;
}

int natural_width(const std::string& text) {
  int widest = 0;
  for (const std::string& line : wrapped(text, 1 << 20)) widest = std::max(widest, width_of(line));
  return widest;
}

void write_row(std::ostream& out, const TableRow& row, const std::vector<int>& widths,
               const TextStyle& style) {
  std::vector<std::vector<std::string>> cells;
  std::size_t height = 0;
  for (std::size_t c = 0; c < row.size(); ++c) {
    cells.push_back(wrapped(row[c].text, widths[c]));
    height = std::max(height, cells.back().size());
  }
  for (std::size_t line = 0; line < height; ++line) {
    std::string text;
    int missing = 0;  // spaces owed before the next cell, so that no line ends in spaces
    for (std::size_t c = 0; c < row.size(); ++c) {
      const std::string part = line < cells[c].size() ? cells[c][line] : "";
      const int padding = widths[c] - width_of(part);
      const int before = row[c].to_the_right ? padding : 0;
      if (!part.empty()) {
        text.append(static_cast<std::size_t>(missing + before), ' ');
        text += painted(part, line == 0 ? row[c].colour : Colour::none, style);
        missing = padding - before + gap;
      } else {
        missing += widths[c] + gap;
      }
    }
    out << text << '\n';
  }
}

}  // namespace

std::string painted(const std::string& text, Colour colour, const TextStyle& style) {
  constexpr std::array<const char*, 4> codes = {"", "\033[1;31m", "\033[1;33m", "\033[1;32m"};
  if (!style.colour || colour == Colour::none) return text;
  return codes.at(static_cast<std::size_t>(colour)) + text + "\033[0m";
}

int width_of(std::string_view text) {
  return static_cast<int>(std::ranges::count_if(text, starts_character));
}

std::vector<std::string> wrapped(std::string_view text, int width) {
  const std::string clean = printable(text);
  std::vector<std::string> lines;
  std::string_view rest = clean;
  while (true) {
    const std::size_t end = rest.find('\n');
    wrap_line(rest.substr(0, end), width, lines);
    if (end == std::string_view::npos) return lines;
    rest.remove_prefix(end + 1);
  }
}

void write_paragraph(std::ostream& out, std::string_view title, std::string_view text,
                     const TextStyle& style) {
  const int indent = width_of(title);
  std::string_view lead = title;
  const std::string blank(static_cast<std::size_t>(indent), ' ');
  for (const std::string& line : wrapped(text, std::max(usable(style) - indent, 1))) {
    out << lead << line << '\n';
    lead = blank;
  }
}

void write_table(std::ostream& out, const std::vector<std::string>& header, const std::vector<TableRow>& rows,
                 const TextStyle& style) {
  std::vector<int> wanted;
  for (std::size_t c = 0; c < header.size(); ++c) {
    wanted.push_back(natural_width(header[c]));
    for (const TableRow& row : rows) wanted.back() = std::max(wanted.back(), natural_width(row[c].text));
  }
  const int gaps = gap * (static_cast<int>(header.size()) - 1);
  const std::vector<int> widths = shared_widths(std::move(wanted), usable(style) - gaps);

  TableRow titles, rules;
  for (std::size_t c = 0; c < header.size(); ++c) {
    const bool to_the_right = !rows.empty() && rows[0][c].to_the_right;
    titles.push_back({header[c], Colour::none, to_the_right});
    rules.push_back({std::string(static_cast<std::size_t>(widths[c]), '-')});
  }
  write_row(out, titles, widths, style);
  write_row(out, rules, widths, style);
  for (const TableRow& row : rows) write_row(out, row, widths, style);
}

}  // namespace pathvet::reporting
