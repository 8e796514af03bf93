#pragma once

#include <optional>

#include "pathvet/model/cell.hpp"
#include "xml/document.hpp"

namespace pathvet::xml {

/// The cell in a document; nothing if it has faults, which the document then holds.
[[nodiscard]] std::optional<Cell> read_cell(Document& document);

}  // namespace pathvet::xml
