#pragma once

#include <iosfwd>
#include <optional>
#include <string>
#include <vector>

#include "pathvet/model/arm.hpp"
#include "pathvet/reporting/text.hpp"

namespace pathvet {

/// One configuration and what the arm can do in it. Internal units.
struct ConfigurationReport {
  JointVector joints;
  Pose pose;  ///< of the TCP in the report's frame
  std::string branch;
  std::vector<double> singular_values;  ///< of the scaled Jacobian, greatest first
  std::optional<double> determinant;    ///< of the scaled Jacobian, where it is square
  bool inside_limits = true;
  /// Per joint the distance to its nearer limit, negative beyond it; none for a continuous joint.
  std::vector<std::optional<double>> margins;

  [[nodiscard]] double min_singular_value() const {
    return singular_values.empty() ? 0 : singular_values.back();
  }
  /// Product of the singular values: the square root of det(J J^T).
  [[nodiscard]] double manipulability() const {
    double product = 1;
    for (double value : singular_values) product *= value;
    return product;
  }
};

/// What `pathvet pose` found: one given configuration, or the configurations of one asked pose.
struct PoseReport {
  std::string cell_file, cell, arm;
  std::string tool;   ///< empty: the flange is the TCP
  std::string frame;  ///< empty: the world
  std::vector<std::string> joint_names;
  std::vector<JointType> joint_types;
  double characteristic_length = 0;  ///< mm
  std::optional<Pose> asked;         ///< in the frame; none: a configuration was given
  bool complete = true;              ///< every isolated configuration was found
  int outside_limits = 0;            ///< configurations that exist beyond the limits but are not listed
  std::vector<ConfigurationReport> configurations;
  std::vector<std::string> notes;  ///< complete sentences
};

void write_pose_text(const PoseReport& report, std::ostream& out, const TextStyle& style);
void write_pose_json(const PoseReport& report, std::ostream& out);

}  // namespace pathvet
