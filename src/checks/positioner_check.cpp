#include "positioner_check.hpp"

#include "moving_frame.hpp"

#include <algorithm>

namespace pathvet {

std::vector<Axis> positioner_axes(const Cell& cell) {
  std::vector<Axis> out;
  int index = 0;
  for (const Positioner& positioner : cell.positioners) {
    for (Axis axis : axes_of(as_arm(positioner))) {
      axis.name = positioner.name + "." + axis.name;
      axis.terms = {{index++, 1.0}};
      out.push_back(std::move(axis));
    }
  }
  return out;
}

JointVector positioner_joints(const Waypoint& waypoint) {
  JointVector out(0);
  for (const JointVector& values : waypoint.external) {
    JointVector longer(out.size() + values.size());
    longer << out, values;
    out = longer;
  }
  return out;
}

void check_positioners(SegmentChecker& checker, const SegmentContext& context, const std::vector<Axis>& axes,
                       int axis_offset, const JointVector& from, const JointVector& to,
                       const JointVector& arm_from, const JointVector& arm_to,
                       std::vector<AxisTally>& tallies) {
  tallies.assign(axes.size(), {});
  for (std::size_t i = 0; i < axes.size(); ++i) {
    const Axis& axis = axes[i];
    const double a = axis.of(from);
    const double b = axis.of(to);
    const double speed = context.duration > 0 ? (b - a) / context.duration : 0.0;
    tallies[i] = {std::min(a, b),  std::max(a, b),
                  speed,           axis.speed ? std::abs(speed) / *axis.speed : 0.0,
                  std::abs(b - a), true};
    const bool angular = axis.type == JointType::revolute;
    const auto flag = [&](Code code, double begin, double end, double peak, double value, double limit,
                          Quantity quantity) {
      Finding f;
      f.code = code;
      f.segment = context.index;
      f.axis = axis_offset + static_cast<int>(i);
      f.begin = begin;
      f.end = end;
      f.peak = peak;
      f.begin_length = context.length_at(begin);
      f.end_length = context.length_at(end);
      f.peak_length = context.length_at(peak);
      f.begin_time = begin * context.duration;
      f.end_time = end * context.duration;
      f.peak_time = peak * context.duration;
      f.value = value;
      f.limit = limit;
      f.quantity = quantity;
      f.joints = peak < 0.5 ? arm_from : arm_to;
      f.pose = context.frame(peak).inverse() * context.arm.chain.forward(f.joints);
      if (code == Code::joint_speed || code == Code::speed_margin) f.ratio = std::abs(value / limit);
      checker.add(std::move(f));
    };
    if (axis.lower) {
      const double margin =
          angular ? context.options.limit_margin_angle : context.options.limit_margin_length;
      for (const double sign : {1.0, -1.0}) {
        const double limit = sign > 0 ? *axis.upper : *axis.lower;
        const auto stretch = [&](Code code, double level, double least) {
          const double at_a = sign * a - level;
          const double at_b = sign * b - level;
          if (std::max(at_a, at_b) <= least) return false;
          const double crossing = at_a == at_b ? 0.0 : at_a / (at_a - at_b);
          const double begin = at_a > 0 ? 0.0 : crossing;
          const double end = at_b > 0 ? 1.0 : crossing;
          const double peak = at_b > at_a ? 1.0 : 0.0;
          const double worst = peak > 0 ? b : a;
          if (code == Code::joint_limit) {
            flag(code, begin, end, peak, worst, limit, angular ? Quantity::angle : Quantity::length);
          } else {
            flag(code, begin, end, peak, sign * (limit - worst), margin,
                 angular ? Quantity::angle : Quantity::length);
          }
          return true;
        };
        if (!stretch(Code::joint_limit, sign * limit + beyond(limit), 0))
          stretch(Code::limit_margin, sign * limit - margin, beyond(limit));
      }
    }
    if (axis.speed) {
      const double signed_limit = speed < 0 ? -*axis.speed : *axis.speed;
      const Quantity quantity = angular ? Quantity::angular_speed : Quantity::linear_speed;
      if (std::abs(speed) > *axis.speed + beyond(*axis.speed)) {
        flag(Code::joint_speed, 0, 1, 0, speed, signed_limit, quantity);
      } else if (context.cartesian &&
                 std::abs(speed) > context.options.speed_margin * *axis.speed * (1 + limit_tolerance)) {
        flag(Code::speed_margin, 0, 1, 0, speed, signed_limit, quantity);
      }
    }
  }
}

}  // namespace pathvet
