#pragma once

#include <map>
#include <string>
#include <vector>

#include "pathvet/model/arm.hpp"

namespace pathvet::test {

/// One source's values: the lines "key: value" between two blank lines of a reference file. A key may stand
/// more than once; the order of its lines is kept.
struct ReferenceBlock {
  std::string file;
  int line = 0;  ///< where the block begins
  std::map<std::string, std::vector<std::string>> lines;

  [[nodiscard]] bool has(const std::string& key) const { return lines.count(key) != 0; }
  /// The one line of a key; throws std::runtime_error (the test file is wrong) where it is not there just
  /// once.
  [[nodiscard]] const std::string& text(const std::string& key) const;
  /// The numbers of the one line of a key.
  [[nodiscard]] std::vector<double> numbers(const std::string& key) const;
  /// The numbers of every line of a key, one vector a line.
  [[nodiscard]] std::vector<std::vector<double>> rows(const std::string& key) const;
  /// "FILE:LINE: NAME (SOURCE)", for messages.
  [[nodiscard]] std::string title() const;
};

/// Reads tests/reference/NAME. Throws std::runtime_error with FILE:LINE on a line that is neither blank, a
/// comment nor "key: value", and where a block has no name, source or tolerance.
[[nodiscard]] std::vector<ReferenceBlock> read_reference_file(const std::string& name);

/// The arm that a block describes, in the block's own length unit.
[[nodiscard]] Arm reference_arm(const ReferenceBlock& block);

/// The block's configuration, in rad and its length unit.
[[nodiscard]] JointVector reference_joints(const ReferenceBlock& block, const Arm& arm);

}  // namespace pathvet::test
