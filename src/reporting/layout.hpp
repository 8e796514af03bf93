#pragma once

#include <iosfwd>
#include <string>
#include <string_view>
#include <vector>

#include "pathvet/reporting/text.hpp"

/// Text laid out in columns of a terminal.
namespace pathvet::reporting {

enum class Colour { none, bad, doubtful, good };

/// `text` in its colour where the style has colours.
[[nodiscard]] std::string painted(const std::string& text, Colour colour, const TextStyle& style);

/// Columns that UTF-8 text takes: one a character.
[[nodiscard]] int width_of(std::string_view text);

/// Lines of at most `width` columns, broken at spaces where there are any; '\n' in the text breaks too.
/// Control characters come out as '?'.
[[nodiscard]] std::vector<std::string> wrapped(std::string_view text, int width);

/// `text` in lines as wide as the style allows, the second and later ones indented as far as `title` is wide.
void write_paragraph(std::ostream& out, std::string_view title, std::string_view text,
                     const TextStyle& style);

struct TableCell {
  std::string text;
  Colour colour = Colour::none;  ///< of its first line
  bool to_the_right = false;
};
using TableRow = std::vector<TableCell>;

/// A table whose cells wrap so that no line is wider than the style's width. Every row has the header's
/// length.
void write_table(std::ostream& out, const std::vector<std::string>& header, const std::vector<TableRow>& rows,
                 const TextStyle& style);

}  // namespace pathvet::reporting
