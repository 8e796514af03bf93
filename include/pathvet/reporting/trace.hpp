#pragma once

#include <iosfwd>
#include <string>
#include <vector>

#include "pathvet/checks/check_path.hpp"
#include "pathvet/model/arm.hpp"

namespace pathvet {

/// Writes the samples of one path as CSV, row by row as they come: mm, deg, s; an empty field for what has no
/// value. The header goes out with the first row. The caller looks at the stream's state.
class TraceWriter {
 public:
  /// Both are kept by reference.
  TraceWriter(const Arm& arm, std::ostream& out);

  void write(const TraceSample& sample);

 private:
  void write_header();
  void text(const std::string& value);
  void number(double value);
  void joint_values(const JointVector& values);
  void end_row();

  const Arm& arm_;
  std::ostream& out_;
  std::string row_;
  bool header_written_ = false;
};

}  // namespace pathvet
