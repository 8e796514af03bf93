#pragma once

#include <sys/wait.h>
#include <unistd.h>

#include <cstdlib>
#include <filesystem>
#include <fstream>
#include <sstream>
#include <stdexcept>
#include <string>

/// A folder of its own for a test, gone with it, and the built program run in it.
namespace pathvet::testing {

inline std::string contents(const std::filesystem::path& file) {
  std::ifstream in(file, std::ios::binary);
  std::ostringstream text;
  text << in.rdbuf();
  return text.str();
}

class Folder {
 public:
  Folder() {
    std::string name = (std::filesystem::temp_directory_path() / "pathvet-test-XXXXXX").string();
    if (!::mkdtemp(name.data())) throw std::runtime_error("no temporary folder");
    path_ = name;
  }
  ~Folder() { std::filesystem::remove_all(path_); }
  Folder(const Folder&) = delete;
  Folder& operator=(const Folder&) = delete;

  [[nodiscard]] std::string operator/(const std::string& name) const { return (path_ / name).string(); }
  [[nodiscard]] const std::filesystem::path& path() const { return path_; }
  void write(const std::string& name, const std::string& text) const { std::ofstream(path_ / name) << text; }
  /// How many entries the folder has, hidden ones too.
  [[nodiscard]] long entries() const {
    return std::distance(std::filesystem::directory_iterator(path_), std::filesystem::directory_iterator());
  }

 private:
  std::filesystem::path path_;
};

struct Outcome {
  int status = -1;
  std::string out, err;
};

/// Runs a shell line in the folder; `pathvet` in it is the built program, `$program` its name. `out` and
/// `err` lie beside the folder.
inline Outcome run(const Folder& folder, const std::string& line) {
  const Folder results;
  const std::string whole = "cd '" + folder.path().string() +
                            "' && program='" PATHVET_PROGRAM "' && pathvet() { \"$program\" \"$@\"; } && { " +
                            line + "; } >'" + results / "out" + "' 2>'" + results / "err" + "'";
  const int code = std::system(whole.c_str());
  return {WIFEXITED(code) ? WEXITSTATUS(code) : -1, contents(results / "out"), contents(results / "err")};
}

/// An arm of three joints and a path of two joint moves that it can do; `target` is J1's last value (limit
/// 170).
inline void write_small_cell(const Folder& folder, const std::string& target = "20") {
  folder.write("cell.xml", R"(<cell version="1" name="bracket cell">
  <arm name="small arm">
    <joint name="J1" type="revolute" lower="-170" upper="170" speed="180"><dh theta="0" d="400" a="0" alpha="90"/></joint>
    <joint name="J2" type="revolute" lower="-170" upper="170" speed="180"><dh theta="0" d="0" a="500" alpha="0"/></joint>
    <joint name="J3" type="revolute" lower="-170" upper="170" speed="180"><dh theta="0" d="0" a="400" alpha="0"/></joint>
  </arm>
  <tool name="pin" position="0 0 50"/>
  <frame name="table" position="300 0 0"/>
</cell>
)");
  folder.write("path.xml", R"(<path version="1" name="bracket" cell="cell.xml" tool="pin" speed="100">
  <waypoint id="A"> <joints>0 30 -60</joints> </waypoint>
  <waypoint id="B" move="joint"> <joints>10 30 -60</joints> </waypoint>
  <waypoint id="C" move="joint"> <joints>)" +
                               target + R"( 30 -60</joints> </waypoint>
</path>
)");
}

}  // namespace pathvet::testing
