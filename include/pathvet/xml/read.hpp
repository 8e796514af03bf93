#pragma once

#include <optional>
#include <string>

#include "pathvet/model/cell.hpp"
#include "pathvet/model/path.hpp"
#include "pathvet/xml/faults.hpp"

namespace pathvet {

/// Reads a cell file. All faults are collected, none is thrown; a file that can't be opened is a fault at
/// 1:1.
[[nodiscard]] Reading<Cell> read_cell(const std::string& file);

/// The same from text already in memory; `file` is the name that faults carry.
[[nodiscard]] Reading<Cell> parse_cell(const std::string& text, const std::string& file);

struct PathAndCell {
  Path path;
  Cell cell;
};

/// Reads a path file and the cell that it names (relative to the path file's folder), or `cell_override`
/// instead. Faults of both files are collected; a cell that can't be opened is told at the path file's `cell`
/// attribute.
[[nodiscard]] Reading<PathAndCell> read_path(const std::string& file,
                                             const std::optional<std::string>& cell_override = {});

/// The path alone, against a cell already read.
[[nodiscard]] Reading<Path> parse_path(const std::string& text, const std::string& file, const Cell& cell);

}  // namespace pathvet
