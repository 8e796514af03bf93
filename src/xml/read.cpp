#include "pathvet/xml/read.hpp"

#include <fmt/format.h>

#include "xml/cell_reader.hpp"
#include "xml/document.hpp"
#include "xml/path_reader.hpp"

namespace pathvet {
namespace {

constexpr std::size_t longest_file_name = 4096;  // bytes shown in a message

Fault unreadable(const std::string& file, const std::string& problem) {
  return {file, {1, 1}, "cannot read the file: " + problem};
}

struct CellAndFaults {
  std::optional<Cell> cell;
  std::vector<Fault> faults;
};

/// The cell that goes with a path. `root` (of the path, if there is one) takes the fault of a cell file that
/// it names and that can't be read.
CellAndFaults read_cell_of(const std::optional<xml::Element>& root, const std::string& path_file,
                           const std::optional<std::string>& cell_override) {
  std::optional<std::string> file = cell_override;
  if (!file && root) file = xml::cell_file_of(*root, path_file);
  if (!file) return {};
  xml::FileText content = xml::load_file(*file);
  if (!content.text && cell_override) return {{}, {unreadable(*file, content.problem)}};
  if (!content.text) {
    root->fault_at("cell", fmt::format("cannot read the cell file {}: {}",
                                       xml::in_quotes(*file, longest_file_name), content.problem));
    return {};
  }
  Reading<Cell> reading = parse_cell(*content.text, *file);
  return {std::move(reading.value), std::move(reading.faults)};
}

}  // namespace

Reading<Cell> parse_cell(const std::string& text, const std::string& file) {
  xml::Document document(text, file);
  std::optional<Cell> cell = xml::read_cell(document);
  return {std::move(cell), document.faults_in_order()};
}

Reading<Cell> read_cell(const std::string& file) {
  const xml::FileText content = xml::load_file(file);
  if (!content.text) return {{}, {unreadable(file, content.problem)}};
  return parse_cell(*content.text, file);
}

Reading<Path> parse_path(const std::string& text, const std::string& file, const Cell& cell) {
  xml::Document document(text, file);
  std::optional<Path> path;
  if (const auto root = document.root("path")) path = xml::read_path(*root, document, &cell);
  if (document.faults().count() > 0) return {{}, document.faults_in_order()};
  return {std::move(path), {}};
}

Reading<PathAndCell> read_path(const std::string& file, const std::optional<std::string>& cell_override) {
  xml::FileText content = xml::load_file(file);
  if (!content.text) return {{}, {unreadable(file, content.problem)}};
  xml::Document document(std::move(*content.text), file);
  const std::optional<xml::Element> root = document.root("path");
  CellAndFaults cell = read_cell_of(root, file, cell_override);
  std::optional<Path> path;
  if (root) path = xml::read_path(*root, document, cell.cell ? &*cell.cell : nullptr);
  std::vector<Fault> faults = document.faults_in_order();
  faults.insert(faults.end(), cell.faults.begin(), cell.faults.end());
  if (!faults.empty() || !path || !cell.cell) return {{}, std::move(faults)};
  if (cell_override) path->cell_file = *cell_override;
  return {PathAndCell{std::move(*path), std::move(*cell.cell)}, {}};
}

}  // namespace pathvet
