#include "pathvet/xml/read.hpp"

#include <doctest/doctest.h>

#include <cstdlib>
#include <filesystem>
#include <fstream>

namespace pathvet {
namespace {

namespace fs = std::filesystem;

/// A folder of its own that is gone afterwards.
class Folder {
 public:
  Folder() {
    std::string name = (fs::temp_directory_path() / "pathvet_read_XXXXXX").string();
    REQUIRE(mkdtemp(name.data()) != nullptr);
    path_ = name;
    fs::create_directories(path_ / "cells");
    fs::create_directories(path_ / "paths");
  }
  ~Folder() { fs::remove_all(path_); }
  Folder(const Folder&) = delete;
  Folder& operator=(const Folder&) = delete;

  [[nodiscard]] std::string operator/(const std::string& file) const { return (path_ / file).string(); }
  std::string write(const std::string& file, const std::string& text) const {
    std::ofstream(path_ / file, std::ios::binary) << text;
    return *this / file;
  }

 private:
  fs::path path_;
};

const std::string cell_text =
    "<cell version='1' name='c'><arm characteristic-length='1'>"
    "<joint name='J' type='revolute' lower='0' upper='1' speed='1'><mount axis='0 0 "
    "1'/></joint></arm></cell>";

std::string path_text(const std::string& cell, const std::string& target = "0.5") {
  return "<path version='1' cell='" + cell + "'>\n<waypoint id='A'><joints>0</joints></waypoint>\n" +
         "<waypoint id='B' move='joint'><joints>" + target + "</joints></waypoint></path>";
}

std::string all(const std::vector<Fault>& faults) {
  std::string list;
  for (const Fault& fault : faults) list += to_string(fault) + '\n';
  return list;
}

TEST_CASE("a path names its cell from its own folder") {
  const Folder folder;
  folder.write("cells/c.xml", cell_text);
  const std::string file = folder.write("paths/p.xml", path_text("../cells/c.xml"));
  const Reading<PathAndCell> reading = read_path(file);
  REQUIRE_MESSAGE(reading.value, all(reading.faults));
  CHECK(reading.value->path.file == file);
  CHECK(reading.value->path.cell_file == folder / "paths/../cells/c.xml");
  CHECK(reading.value->cell.file == reading.value->path.cell_file);
  CHECK(reading.value->cell.name == "c");
  CHECK(reading.value->path.waypoints.size() == 2);
}

TEST_CASE("another cell may stand in for the one that the path names") {
  const Folder folder;
  const std::string other = folder.write("cells/other.xml", cell_text);
  const std::string file = folder.write("paths/p.xml", path_text("missing.xml"));
  const Reading<PathAndCell> reading = read_path(file, other);
  REQUIRE_MESSAGE(reading.value, all(reading.faults));
  CHECK(reading.value->path.cell_file == other);
  const std::string missing = folder / "none.xml";
  CHECK(all(read_path(file, missing).faults) ==
        missing + ":1:1: error: cannot read the file: No such file or directory\n");
}

TEST_CASE("a file that can't be read is a fault at its begin") {
  const Folder folder;
  const std::string missing = folder / "none.xml";
  const std::string expected = missing + ":1:1: error: cannot read the file: No such file or directory\n";
  CHECK(all(read_cell(missing).faults) == expected);
  CHECK(all(read_path(missing).faults) == expected);
  CHECK(all(read_cell(folder / "cells").faults) ==
        (folder / "cells") + ":1:1: error: cannot read the file: Is a directory\n");
}

TEST_CASE("a cell that can't be read is told where the path names it, beside the path's own faults") {
  const Folder folder;
  const std::string file = folder.write("paths/p.xml", path_text("c.xml", "x"));
  CHECK(all(read_path(file).faults) == file + ":1:19: error: cannot read the cell file \"" +
                                           (folder / "paths/c.xml") + "\": No such file or directory\n" +
                                           file + ":3:39: error: <joints>: \"x\" is not a number\n");
}

TEST_CASE("faults of the path that need no cell are told beside those of the cell") {
  const Folder folder;
  const std::string cell = folder.write("paths/c.xml", "<cell version='2'/>");
  const std::string file = folder.write("paths/p.xml", path_text("c.xml", "x"));
  CHECK(all(read_path(file).faults) == file + ":3:39: error: <joints>: \"x\" is not a number\n" + cell +
                                           ":1:1: error: <cell> has no <arm>; expected one\n" + cell +
                                           ":1:7: error: version \"2\" of <cell>; expected \"1\"\n");
  // how many numbers there must be, and whether a tool is known, can't be said
  folder.write("paths/p.xml", path_text("c.xml' tool='t", "1 2 3"));
  CHECK(read_path(file).faults.size() == 2);
  folder.write("paths/p.xml", "<path>");
  CHECK(all(read_path(file).faults) == file + ":1:1: error: <path> is not closed; expected </path>\n");
}

TEST_CASE("a byte order mark is passed over") {
  CHECK(parse_cell("\xEF\xBB\xBF" + cell_text, "c").value);
}

}  // namespace
}  // namespace pathvet
