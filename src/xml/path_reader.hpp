#pragma once

#include <optional>

#include "pathvet/model/path.hpp"
#include "xml/document.hpp"

namespace pathvet::xml {

/// The path below the root of a document; the document then holds its faults. Without a cell, only what can
/// be said without it is checked, and the path is good for nothing else.
[[nodiscard]] Path read_path(const Element& root, const Document& document, const Cell* cell);

/// The cell file that a path file names, from the current folder; nothing if the attribute is missing or
/// empty.
[[nodiscard]] std::optional<std::string> cell_file_of(const Element& root, const std::string& path_file);

}  // namespace pathvet::xml
