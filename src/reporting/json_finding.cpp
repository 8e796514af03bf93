#include "reporting/json_finding.hpp"

#include "pathvet/reporting/messages.hpp"
#include "reporting/phrases.hpp"
#include "reporting/units.hpp"

namespace pathvet::reporting {
namespace {

bool has_ratio(Code code) {
  return code == Code::joint_speed || code == Code::speed_margin || code == Code::joint_acceleration ||
         code == Code::arm_speed;
}

void add_change(Json& out, const PathResult& path, const Finding& f) {
  const std::vector<JointType> types = joint_types(path);
  out["from_joints"] = joint_values(f.from_joints, types);
  out["to_joints"] = joint_values(f.to_joints, types);
  out["from_branch"] = f.from_branch;
  out["to_branch"] = f.to_branch;
}

void add_singular(Json& out, const PathResult& path, const SingularDetail& singular) {
  out["kind"] = name(singular.kind);
  out["nearness"] = in_unit(singular.nearness, singular.nearness_quantity);
  out["nearness_unit"] = unit(singular.nearness_quantity);
  Json joints = Json::array();
  for (const Share& share : runaway_shares(singular.runaway, 0)) {
    joints.push_back({{"joint", axis_name(path, share.joint)}, {"share", number(share.share)}});
  }
  out["runaway_joints"] = std::move(joints);
  Json lost = Json::array();
  for (double component : singular.lost_motion) lost.push_back(number(component));
  out["lost_motion"] = std::move(lost);
}

/// What only findings of some codes carry.
void add_details(Json& out, const PathResult& path, const Finding& f) {
  if (has_ratio(f.code)) out["ratio"] = f.unbounded ? Json(nullptr) : number(f.ratio);
  if (f.code == Code::joint_jump || f.code == Code::branch_flip) add_change(out, path, f);
  if (f.code == Code::out_of_reach) {
    out["position_miss_mm"] = in_unit(f.position_miss, Quantity::length);
    out["orientation_miss_deg"] = in_unit(f.orientation_miss, Quantity::angle);
  }
  if (f.singular) add_singular(out, path, *f.singular);
  if (!f.point.empty()) out["point"] = f.point;
  if (f.helpful_speed) {
    const SegmentResult& segment = segment_of(path, f);
    out["helpful_speed"] = number(to_programmed_unit(segment, *f.helpful_speed));
  }
}

}  // namespace

Json finding_json(const PathResult& path, std::size_t index) {
  const Finding& f = path.findings.at(index);
  const SegmentResult& segment = segment_of(path, f);
  Json out;
  out["index"] = index;
  out["code"] = name(f.code);
  out["level"] = level(f.code) == Level::error ? "error" : "warning";
  out["segment"] = f.segment;
  out["from"] = segment.from;
  out["to"] = segment.to;
  out["line"] = segment.place.line;
  out["joint"] = text_or_null(axis_name(path, f.axis));
  out["begin"] = number(f.begin);
  out["end"] = number(f.end);
  out["peak"] = number(f.peak);
  out["begin_mm"] = number(f.begin_length);
  out["end_mm"] = number(f.end_length);
  out["peak_mm"] = number(f.peak_length);
  out["begin_s"] = number(f.begin_time);
  out["end_s"] = number(f.end_time);
  out["peak_s"] = number(f.peak_time);
  out["value"] = f.unbounded ? Json(nullptr) : in_unit(f.value, f.quantity);
  out["limit"] = in_unit(f.limit, f.quantity);
  out["unit"] = unit(f.quantity);
  out["joints"] = joint_values(f.joints, joint_types(path));
  out["position"] = position(f.pose);
  out["quaternion"] = quaternion(f.pose);
  out["message"] = message(path, f);
  out["remedy"] = remedy(path, f);
  add_details(out, path, f);
  out["column"] = segment.place.column;
  return out;
}

}  // namespace pathvet::reporting
