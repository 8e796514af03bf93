#include "pathvet/reporting/trace.hpp"

#include <array>
#include <charconv>
#include <cmath>
#include <ostream>

#include "pathvet/model/units.hpp"

namespace pathvet {
namespace {

// Division, unlike multiplying by the inverse, gives back most angles as they were written.
double user_value(double value, JointType type) {
  return type == JointType::revolute ? value / radians_per_degree : value;
}

}  // namespace

TraceWriter::TraceWriter(const Arm& arm, std::ostream& out) : arm_(arm), out_(out) {}

void TraceWriter::write(const TraceSample& sample) {
  if (!header_written_) write_header();
  number(sample.segment);
  number(sample.fraction);
  number(sample.length);
  number(sample.time);
  joint_values(sample.joints);
  joint_values(sample.speeds);
  number(sample.min_singular_value);
  text(sample.branch);
  number(sample.position_residual);
  number(sample.orientation_residual / radians_per_degree);
  end_row();
}

void TraceWriter::write_header() {
  header_written_ = true;
  for (const char* name : {"segment", "fraction", "length_mm", "time_s"}) text(name);
  for (const Joint& joint : arm_.joints) text(joint.name);
  for (const Joint& joint : arm_.joints) text(joint.name + "_speed");
  for (const char* name :
       {"min_singular_value", "branch", "position_residual_mm", "orientation_residual_deg"}) {
    text(name);
  }
  end_row();
}

/// RFC 4180: quoted where it has to be.
void TraceWriter::text(const std::string& value) {
  if (value.find_first_of(",\"\r\n") == std::string::npos) {
    row_ += value;
  } else {
    row_ += '"';
    for (char letter : value) row_.append(letter == '"' ? 2 : 1, letter);
    row_ += '"';
  }
  row_ += ',';
}

void TraceWriter::number(double value) {
  if (std::isfinite(value)) {
    std::array<char, 32> digits;  // the longest double takes 24
    // Adding zero turns -0 into 0.
    const auto written = std::to_chars(digits.data(), digits.data() + digits.size(), value + 0.0);
    row_.append(digits.data(), written.ptr);
  }
  row_ += ',';
}

void TraceWriter::joint_values(const JointVector& values) {
  for (std::size_t i = 0; i < arm_.joints.size(); ++i) {
    number(user_value(values[static_cast<Eigen::Index>(i)], arm_.joints[i].type));
  }
}

void TraceWriter::end_row() {
  row_.back() = '\n';
  out_.write(row_.data(), static_cast<std::streamsize>(row_.size()));
  row_.clear();
}

}  // namespace pathvet
