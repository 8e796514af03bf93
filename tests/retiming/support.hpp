#pragma once

#include <optional>
#include <string>

#include <doctest/doctest.h>

#include "pathvet/retiming/retime.hpp"
#include "pathvet/xml/read.hpp"

namespace pathvet::test {

/// Two links of 600 and 400 mm in a plane; J2 turns at 180 deg/s at most.
inline constexpr const char* planar_cell =
    R"(<cell version="1" name="plane"><arm name="two links" characteristic-length="1000">
<joint name="J1" type="revolute" lower="-360" upper="360" speed="1000"><dh theta="0" d="0" a="600" alpha="0"/></joint>
<joint name="J2" type="revolute" lower="-179" upper="179" speed="180"><dh theta="0" d="0" a="400" alpha="0"/></joint>
</arm></cell>)";

/// Six joints with a spherical wrist (reference values, section 4.2); {0} and {1} stand for limits of J1 and
/// J4.
inline std::string six_joint_cell(const std::string& j1_speed, const std::string& j4_speed) {
  const auto joint = [](const char* name, const std::string& speed, const char* dh) {
    return std::string("<joint name=\"") + name +
           "\" type=\"revolute\" lower=\"-360\" upper=\"360\" speed=\"" + speed + "\"><dh " + dh +
           "/></joint>\n";
  };
  return "<cell version=\"1\" name=\"six\"><arm name=\"six joints\" characteristic-length=\"1000\">\n" +
         joint("J1", j1_speed, "theta=\"0\" d=\"450\" a=\"0\" alpha=\"90\"") +
         joint("J2", "1000", "theta=\"0\" d=\"0\" a=\"600\" alpha=\"0\"") +
         joint("J3", "1000", "theta=\"0\" d=\"0\" a=\"0\" alpha=\"90\"") +
         joint("J4", j4_speed, "theta=\"0\" d=\"500\" a=\"0\" alpha=\"-90\"") +
         joint("J5", "1000", "theta=\"0\" d=\"0\" a=\"0\" alpha=\"90\"") +
         joint("J6", "5000", "theta=\"0\" d=\"100\" a=\"0\" alpha=\"0\"") + "</arm></cell>";
}

/// Two sliding joints at right angles, 200 mm/s and 400 mm/s^2 each.
inline constexpr const char* gantry_cell =
    R"(<cell version="1" name="gantry"><arm name="gantry" characteristic-length="1000">
<joint name="X" type="prismatic" lower="-1000" upper="1000" speed="200" acceleration="400"><mount axis="1 0 0"/></joint>
<joint name="Y" type="prismatic" lower="-1000" upper="1000" speed="200" acceleration="400"><mount axis="0 1 0"/></joint>
</arm></cell>)";

inline Cell cell_of(const std::string& text) {
  Reading<Cell> reading = parse_cell(text, "cell.xml");
  for (const Fault& fault : reading.faults) FAIL(to_string(fault));
  return std::move(*reading.value);
}

inline Path path_of(const std::string& text, const Cell& cell) {
  Reading<Path> reading = parse_path(text, "path.xml", cell);
  for (const Fault& fault : reading.faults) FAIL(to_string(fault));
  return std::move(*reading.value);
}

inline Recording recording_of(const Path& path, const Cell& cell) {
  Reading<Recording> reading = record_path(path, cell, CheckOptions{});
  for (const Fault& fault : reading.faults) FAIL(to_string(fault));
  return std::move(*reading.value);
}

inline Retiming retimed(const std::string& text, const Cell& cell, const RetimeOptions& options = {}) {
  const Path path = path_of(text, cell);
  Reading<Retiming> reading = retime(recording_of(path, cell), text, path, cell, options);
  for (const Fault& fault : reading.faults) FAIL(to_string(fault));
  return std::move(*reading.value);
}

inline RetimeOptions by_segment() {
  RetimeOptions options;
  options.most_cuts = 0;
  return options;
}

/// Findings that a speed could have helped against.
inline int too_fast(const PathResult& result) {
  int count = 0;
  for (const Finding& f : result.findings)
    count += f.code == Code::joint_speed || f.code == Code::joint_acceleration;
  return count;
}

/// The wrist centre passes axis 1 at 40 mm, 250 mm/s (reference values, 4.6): the programmed run takes 4 s.
/// Laid out so that a rewriter has something to spoil.
inline constexpr const char* overhead_path = R"(<?xml version="1.0" encoding="UTF-8"?>
<!-- overhead -->
<path version='1' name="overhead" cell="cell.xml"
      speed="250">
  <waypoint   id="A"><joints>175.426079 85.789751 27.991030 0 66.219219 4.573921</joints> <pose position="-500 40 1350" quaternion="1 0 0 0"/></waypoint>
  <!-- the far side -->
	<waypoint id='B'  move="linear" > <pose position="500 40 1350" quaternion="1 0 0 0"/>   </waypoint>
</path>
)";

}  // namespace pathvet::test
