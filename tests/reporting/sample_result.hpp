#pragma once

#include "pathvet/checks/result.hpp"
#include "pathvet/model/units.hpp"
#include "pathvet/reporting/report.hpp"

/// A hand-made result with one finding of every code: what writers are tested against.
namespace pathvet::sample {

inline double deg(double degrees) {
  return degrees * radians_per_degree;
}

inline JointVector joints(std::initializer_list<double> degrees) {
  JointVector values(static_cast<Eigen::Index>(degrees.size()));
  Eigen::Index i = 0;
  for (double angle : degrees) values[i++] = deg(angle);
  return values;
}

inline AxisResult axis(const char* name, double limit, double speed) {
  AxisResult axis;
  axis.name = name;
  axis.lower = deg(-limit);
  axis.upper = deg(limit);
  axis.speed_limit = deg(speed);
  axis.min = deg(-10);
  axis.max = deg(30);
  axis.peak_speed = deg(-45);
  axis.peak_ratio = 45 / speed;
  axis.travel = deg(40);
  return axis;
}

/// "a" (mm track), "J1" and "J2" (revolute) and the combined limit "J1+J2"; segments A-B (joint), B-C
/// (linear), C-D (turn on the spot).
inline PathResult empty_path() {
  PathResult path;
  path.file = "flange-trim.xml";
  path.name = "flange trim";
  path.cell_file = "cells/bracket.xml";
  path.cell = "bracket cell";
  path.arm = "arm on a track";
  path.characteristic_length = 812.5;
  AxisResult track;
  track.name = "a";
  track.type = JointType::prismatic;
  track.lower = 0;
  track.upper = 1500;
  track.speed_limit = 400;
  path.axes = {track, axis("J1", 170, 180), axis("J2", 120, 360), axis("J1+J2", 200, 200)};
  path.axes[3].speed_limit.reset();
  path.joint_count = 3;
  path.start = JointVector(3);
  path.start << 100, deg(60), deg(-30);
  path.start_branch = "+";
  path.length = 420.5;
  path.duration = 4.25;
  path.samples = 431;
  path.proven_fraction = 1;
  for (int i = 1; i <= 3; ++i) {
    SegmentResult segment;
    segment.index = i;
    segment.from = std::string(1, static_cast<char>('A' + i - 1));
    segment.to = std::string(1, static_cast<char>('A' + i));
    segment.place = {3 + i, 5};
    segment.duration = 1.25;
    segment.samples = 100;
    segment.branch = "+";
    segment.peak_ratio = 0.5;
    segment.peak_axis = 1;
    segment.min_singular_value = 0.25;
    segment.limit_margin = deg(12);
    segment.limit_margin_axis = 2;
    segment.ratio_profile = {0, 0.25, 0.5};
    path.segments.push_back(segment);
  }
  path.segments[0].move = Move::joint;
  path.segments[0].highest_speed = 1.0;
  path.segments[1].length = 150;
  path.segments[1].highest_speed = 75.0;
  path.segments[2].turn_on_the_spot = true;
  path.segments[2].turn = deg(30);
  return path;
}

inline Finding finding(Code code, int segment, int axis, double value, double limit, Quantity quantity) {
  Finding f;
  f.code = code;
  f.segment = segment;
  f.axis = axis;
  f.begin = 0.25;
  f.end = 0.5;
  f.peak = 0.375;
  f.begin_length = 37.5;
  f.end_length = 75;
  f.peak_length = 56.25;
  f.begin_time = 0.3125;
  f.end_time = 0.625;
  f.peak_time = 0.46875;
  f.value = value;
  f.limit = limit;
  f.quantity = quantity;
  if (limit != 0) f.ratio = std::abs(value / limit);
  f.joints.resize(3);
  f.joints << 200, deg(45), deg(-15);
  f.pose.position = {1, 2.5, -3};
  return f;
}

inline Finding speed_finding() {
  Finding f = finding(Code::joint_speed, 2, 2, deg(-450), deg(-360), Quantity::angular_speed);
  f.helpful_speed = 93.75;
  return f;
}

inline Finding singular_finding() {
  Finding f = finding(Code::singular_pass, 2, -1, 0.005, 0.02, Quantity::pure);
  SingularDetail detail;
  detail.kind = SingularKind::wrist;
  detail.smallest_singular_value = 0.005;
  detail.nearness = deg(0.5);
  detail.nearness_quantity = Quantity::angle;
  detail.runaway = JointVector(3);
  detail.runaway << 0, 0.8, -0.6;
  detail.lost_motion << 0, 0, 0, 0, 1, 0;
  f.singular = detail;
  return f;
}

inline Finding jump_finding() {
  Finding f = finding(Code::joint_jump, 2, -1, 0, 0, Quantity::none);
  f.value.reset();
  f.limit.reset();
  f.end = f.peak = f.begin;
  f.from_joints = f.joints;
  f.to_joints = f.joints;
  f.to_joints[2] += deg(180);
  f.from_branch = "+";
  f.to_branch = "-";
  return f;
}

/// One finding of every code on segment 2, in the order of the codes.
inline PathResult full_path() {
  PathResult path = empty_path();
  Finding too_fast = finding(Code::arm_speed, 2, -1, 312, 250, Quantity::linear_speed);
  too_fast.point = "J2";
  too_fast.helpful_speed = 96.1;
  Finding flip = finding(Code::branch_flip, 2, -1, 0, 0, Quantity::none);
  flip.value.reset();
  flip.limit.reset();
  flip.from_branch = "+++";
  flip.to_branch = "++-";
  flip.from_joints = flip.to_joints = flip.joints;
  Finding reach = finding(Code::out_of_reach, 2, -1, 12.5, 0, Quantity::length);
  reach.limit.reset();
  reach.position_miss = 12.5;
  reach.orientation_miss = deg(4);
  Finding unproven = finding(Code::unproven, 2, -1, 0, 0, Quantity::none);
  unproven.value.reset();
  unproven.limit.reset();
  Finding taught = finding(Code::taught_mismatch, 2, 1, deg(-360), deg(0.5), Quantity::angle);
  path.findings = {
      too_fast,
      flip,
      finding(Code::joint_acceleration, 2, 1, deg(700), deg(500), Quantity::angular_acceleration),
      jump_finding(),
      finding(Code::joint_limit, 2, 2, deg(125), deg(120), Quantity::angle),
      speed_finding(),
      finding(Code::limit_margin, 2, 0, 4, 10, Quantity::length),
      reach,
      singular_finding(),
      finding(Code::speed_margin, 2, 1, deg(162), deg(180), Quantity::angular_speed),
      taught,
      unproven};
  for (int i = 0; i < static_cast<int>(path.findings.size()); ++i) path.segments[1].findings.push_back(i);
  path.segments[1].peak_ratio = 1.25;
  path.segments[1].peak_axis = 2;
  path.segments[1].ratio_profile = {0.1, 0.2, 0.4, 0.9, 1.25, 0.3};
  path.notes = {"The blend at B was cut to 5 mm, half of the segment A-B."};
  return path;
}

inline Report report(PathResult path) {
  Report report;
  report.tool_version = "0.1.0";
  report.paths.push_back(std::move(path));
  return report;
}

}  // namespace pathvet::sample
