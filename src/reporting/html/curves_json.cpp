#include "reporting/html/curves_json.hpp"

#include <algorithm>
#include <array>
#include <bit>
#include <cmath>
#include <cstdint>
#include <tuple>

#include "reporting/units.hpp"

namespace pathvet::reporting {
namespace {

constexpr double rounding =
    1e-9;  // of a segment's fraction, where the follower lost the path and met it again

std::string base64(const std::string& bytes) {
  constexpr const char* letters = "ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789+/";
  std::string out;
  out.reserve((bytes.size() + 2) / 3 * 4);
  for (std::size_t i = 0; i < bytes.size(); i += 3) {
    const std::size_t here = std::min<std::size_t>(3, bytes.size() - i);
    std::uint32_t bits = 0;
    for (std::size_t k = 0; k < 3; ++k) {
      bits = bits << 8 | (k < here ? static_cast<std::uint8_t>(bytes[i + k]) : 0U);
    }
    for (std::size_t k = 0; k < 4; ++k) out += k <= here ? letters[bits >> (18 - 6 * k) & 63U] : '=';
  }
  return out;
}

/// Numbers of one column, as bytes from the lowest up.
template <typename Float, typename Bits>
class Column {
 public:
  void add(double value) {
    const auto bits = std::bit_cast<Bits>(static_cast<Float>(value));
    for (std::size_t i = 0; i < sizeof(Bits); ++i) bytes_ += static_cast<char>(bits >> (8 * i) & 255U);
  }
  [[nodiscard]] Json json() const { return base64(bytes_); }

 private:
  std::string bytes_;
};
using Singles = Column<float, std::uint32_t>;
using Doubles = Column<double, std::uint64_t>;

Json placement_json(const Pose& pose) {
  Json out = Json::array();
  for (int row = 0; row < 3; ++row) {
    for (int column = 0; column < 3; ++column) out.push_back(number(pose.rotation(row, column)));
    out.push_back(number(pose.position[row]));
  }
  return out;
}

Json arm_json(const PathCurves& curves) {
  Json out;
  out["base"] = placement_json(curves.arm.base);
  out["joints"] = Json::array();
  for (const Joint& joint : curves.arm.joints) {
    out["joints"].push_back({{"turns", joint.type == JointType::revolute},
                             {"before", placement_json(joint.before)},
                             {"after", placement_json(joint.after)}});
  }
  out["flange"] = placement_json(curves.arm.flange);
  out["tools"] = Json::array();
  for (const Pose& tool : curves.tools) out["tools"].push_back(placement_json(tool));
  out["tool_of_segment"] = curves.tool_of_segment;
  return out;
}

/// Where rows have no values: begin, worst place and end of each stretch out of reach.
std::vector<CurveRow> gaps(const PathResult& path, std::size_t values) {
  std::vector<CurveRow> rows;
  double length = 0;
  double time = 0;
  std::size_t done = 0;
  const std::vector<double> nothing(values, std::nan(""));
  for (const Finding& f : path.findings) {
    if (f.code != Code::out_of_reach) continue;
    for (; done + 1 < static_cast<std::size_t>(f.segment); ++done) {
      length += path.segments[done].length;
      time += path.segments[done].duration + path.segments[done].dwell;
    }
    const Vector3 nowhere = Vector3::Constant(std::nan(""));
    rows.push_back({f.segment, f.begin, length + f.begin_length, time + f.begin_time, nothing, nowhere});
    rows.push_back({f.segment, f.peak, length + f.peak_length, time + f.peak_time, nothing, nowhere});
    rows.push_back({f.segment, f.end, length + f.end_length, time + f.end_time, nothing, nowhere});
  }
  return rows;
}

/// Each gap's first row comes after what is known at its place, its second one before; rows at its ends may
/// lie a rounding error inside.
void add_gaps(std::vector<CurveRow>& rows, const std::vector<CurveRow>& gap_rows) {
  const auto before = [](const CurveRow& a, const CurveRow& b) {
    return std::tie(a.segment, a.fraction) < std::tie(b.segment, b.fraction);
  };
  for (std::size_t i = 0; i + 2 < gap_rows.size(); i += 3) {
    CurveRow begin = gap_rows[i];
    CurveRow end = gap_rows[i + 2];
    const double hair = std::min(rounding, (end.fraction - begin.fraction) / 4);
    begin.fraction += hair;
    end.fraction -= hair;
    rows.insert(std::lower_bound(rows.begin(), rows.end(), end, before), gap_rows[i + 2]);
    const auto place = std::upper_bound(rows.begin(), rows.end(), begin, before);
    rows.insert(place, {gap_rows[i], gap_rows[i + 1]});
  }
}

}  // namespace

Json curves_json(const PathResult& path, PathCurves curves) {
  const std::size_t axes = path.axes.size();
  add_gaps(curves.rows, gaps(path, 2 * axes + 1));
  Doubles length, time;
  Singles segment, fraction, singular, tcp, waypoints;
  std::vector<Singles> positions(axes), speeds(axes);
  for (const CurveRow& row : curves.rows) {
    segment.add(row.segment);
    fraction.add(row.fraction);
    length.add(row.length);
    time.add(row.time);
    for (std::size_t i = 0; i < axes; ++i) {
      positions[i].add(to_user(row.values.at(i), position_quantity(path.axes[i].type)));
      speeds[i].add(row.values.at(axes + i));
    }
    singular.add(row.values.back());
    for (double x : row.tcp) tcp.add(x);
  }
  for (const Vector3& waypoint : curves.waypoints) {
    for (double x : waypoint) waypoints.add(x);
  }
  Json out;
  out["rows"] = curves.rows.size();
  out["segment"] = segment.json();
  out["fraction"] = fraction.json();
  out["length"] = length.json();
  out["time"] = time.json();
  out["positions"] = Json::array();
  for (const Singles& column : positions) out["positions"].push_back(column.json());
  out["speeds"] = Json::array();
  for (const Singles& column : speeds) out["speeds"].push_back(column.json());
  out["singular"] = singular.json();
  out["tcp"] = tcp.json();
  out["waypoints"] = waypoints.json();
  out["arm"] = arm_json(curves);
  out["start_line"] = curves.start_place.line;
  return out;
}

}  // namespace pathvet::reporting
