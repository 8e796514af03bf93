#include <array>
#include <charconv>
#include <cmath>
#include <ostream>

#include "pathvet/model/units.hpp"
#include "pathvet/reporting/retime_report.hpp"

namespace pathvet {
namespace {

/// A row of CSV (RFC 4180) on its way.
class Row {
 public:
  void text(const std::string& value) {
    separate();
    if (value.find_first_of(",\"\r\n") == std::string::npos) {
      row_ += value;
      return;
    }
    row_ += '"';
    for (char letter : value) row_.append(letter == '"' ? 2 : 1, letter);
    row_ += '"';
  }
  void number(double value) {
    separate();
    if (!std::isfinite(value)) return;
    std::array<char, 32> digits;  // the longest double takes 24
    const auto written = std::to_chars(digits.data(), digits.data() + digits.size(), value + 0.0);
    row_.append(digits.data(), written.ptr);
  }
  void joints(const JointVector& values, const Arm& arm) {
    for (std::size_t i = 0; i < arm.joints.size(); ++i) {
      const double value = values[static_cast<Eigen::Index>(i)];
      number(arm.joints[i].type == JointType::revolute ? value / radians_per_degree : value);
    }
  }
  void send(std::ostream& out) {
    row_ += '\n';
    out.write(row_.data(), static_cast<std::streamsize>(row_.size()));
    row_.clear();
  }

 private:
  void separate() {
    if (!row_.empty()) row_ += ',';
  }
  std::string row_;
};

}  // namespace

void write_profile_csv(const Profile& profile, const Arm& arm, std::ostream& out) {
  Row row;
  for (const char* name : {"segment", "fraction", "time_s", "tcp_speed"}) row.text(name);
  for (const char* suffix : {"", "_speed", "_acceleration"}) {
    for (const Joint& joint : arm.joints) row.text(joint.name + suffix);
  }
  row.send(out);
  for (const ProfilePoint& point : profile.points) {
    row.number(point.segment);
    row.number(point.fraction);
    row.number(point.time);
    row.number(point.tcp_speed);
    row.joints(point.joints, arm);
    row.joints(point.speeds, arm);
    row.joints(point.accelerations, arm);
    row.send(out);
  }
}

}  // namespace pathvet
