#include "segment_checker.hpp"

#include <algorithm>
#include <array>
#include <cmath>

namespace pathvet {
namespace {

constexpr int profile_bins = 48;
/// Arc steps: a joint that moves less than this share of the arc does not count as moving (rounding), and a
/// rate of the fraction below `stalled` of it is a fold: the joint speeds grow without bound there.
constexpr double still = 1e-9;
constexpr double stalled = 1e-7;

/// d(rate / fraction_rate)/dt times fraction_rate squared.
double speed_slope(const Axis& axis, const Node& n) {
  return axis.of(n.rate_rate) * n.fraction_rate - axis.of(n.rate) * n.fraction_rate_rate;
}

bool is_rate(Code code) {
  return code == Code::joint_speed || code == Code::speed_margin || code == Code::joint_acceleration ||
         code == Code::arm_speed;
}

/// Third derivatives by t of the quintic through a step's ends.
class JerkOfStep {
 public:
  explicit JerkOfStep(const Step& step) : step_(step) {}
  [[nodiscard]] JointVector joints(double t) const {
    const Node& a = step_.begin;
    const Node& b = step_.end;
    return mix(t, JointVector(b.q - a.q), a.rate, b.rate, a.rate_rate, b.rate_rate);
  }
  [[nodiscard]] double fraction(double t) const {
    const Node& a = step_.begin;
    const Node& b = step_.end;
    return mix(t, b.fraction - a.fraction, a.fraction_rate, b.fraction_rate, a.fraction_rate_rate,
               b.fraction_rate_rate);
  }

 private:
  template <typename T>
  [[nodiscard]] T mix(double t, const T& change, const T& d0, const T& d1, const T& s0, const T& s1) const {
    const double h = step_.length;
    const double u = t / h;
    return ((60 - 360 * u + 360 * u * u) * change +
            h * ((-36 + 192 * u - 180 * u * u) * d0 + (-24 + 168 * u - 180 * u * u) * d1) +
            h * h * ((-9 + 36 * u - 30 * u * u) * s0 + (3 - 24 * u + 30 * u * u) * s1)) /
           (h * h * h);
  }
  const Step& step_;
};

bool at_fold(const Step& step, const Node& node) {
  return step.kind != Step::Kind::fraction && std::abs(node.fraction_rate) < stalled * step.fraction_unit;
}

}  // namespace

SegmentChecker::SegmentChecker(const SegmentContext& context, const StepSampler& sampler,
                               CheckObserver* observer)
    : context_(context),
      sampler_(sampler),
      observer_(observer),
      points_(context.arm.arm, context.arm.chain),
      tallies_(context.axes.size()),
      ratio_profile_(profile_bins, 0.0),
      rate_scale_(context.duration > 0 ? 1.0 / context.duration : 0.0) {
  const CheckOptions& o = context.options;
  constexpr std::size_t most_watches_an_axis = 10;
  watches_.reserve(most_watches_an_axis * context.axes.size());
  watch_range_.reserve(context.axes.size());
  for (std::size_t i = 0; i < context.axes.size(); ++i) {
    const Axis& axis = context.axes[i];
    const std::size_t first = watches_.size();
    const double margin = axis.type == JointType::revolute ? o.limit_margin_angle : o.limit_margin_length;
    const auto add_watch = [&](Code code, double sign, double limit, double level, double least) {
      Watch watch;
      watch.code = code;
      watch.axis = static_cast<int>(i);
      watch.sign = sign;
      watch.limit = limit;
      watch.level = level;
      watch.least = least;
      watches_.push_back(watch);
    };
    if (axis.lower) {
      add_watch(Code::joint_limit, 1, *axis.upper, *axis.upper + beyond(*axis.upper), 0);
      add_watch(Code::joint_limit, -1, *axis.lower, -*axis.lower + beyond(*axis.lower), 0);
      add_watch(Code::limit_margin, 1, margin, *axis.upper - margin, beyond(*axis.upper));
      add_watch(Code::limit_margin, -1, margin, -*axis.lower - margin, beyond(*axis.lower));
    }
    if (axis.speed && context.cartesian) {
      for (const double sign : {1.0, -1.0}) {
        add_watch(Code::joint_speed, sign, sign * *axis.speed, *axis.speed + beyond(*axis.speed), 0);
        add_watch(Code::speed_margin, sign, sign * *axis.speed,
                  o.speed_margin * *axis.speed * (1 + limit_tolerance), 0);
      }
    }
    if (axis.acceleration && context.cartesian) {
      for (const double sign : {1.0, -1.0})
        add_watch(Code::joint_acceleration, sign, sign * *axis.acceleration,
                  *axis.acceleration + beyond(*axis.acceleration), 0);
    }
    watch_range_.emplace_back(first, watches_.size());
  }
  if (o.reduced_speed) {
    for (int point = 0; point < points_.count(); ++point) {
      Watch watch;
      watch.code = Code::arm_speed;
      watch.point = point;
      watch.limit = *o.reduced_speed;
      watch.level = *o.reduced_speed * (1 + limit_tolerance);
      point_watches_.push_back(watch);
    }
  }
  singular_.code = Code::singular_pass;
  singular_.limit = singular_.level = o.singular_below;
  unproven_.code = Code::unproven;
}

bool SegmentChecker::step(const Step& step, double position_residual, double orientation_residual) {
  position_residual_ = std::max(position_residual_, position_residual);
  orientation_residual_ = std::max(orientation_residual_, orientation_residual);
  for (std::size_t i = 0; i < context_.axes.size(); ++i) {
    tally(i, step);
    check_axis(i, step);
  }
  check_points(step);
  check_singular(step);
  if (context_.cartesian) check_proof(step);
  trace(step, position_residual, orientation_residual);
  fresh_ = false;
  if (observer_) observer_->step(context_.index, step, sampler_);
  ++samples_;
  return true;
}

double SegmentChecker::third_bound(const Axis& axis, const Step& step) const {
  if (step.kind == Step::Kind::fraction)
    return axis.reach(context_.arm.chain.characteristic_length()) * step.third_bound;
  if (step.kind == Step::Kind::interpolated) return step.third_bound;
  // The proven bound is too coarse for the long steps by arc length. Inside a proven ball the curve is
  // analytic well beyond the step, so four times the mean third derivative stands in for its greatest.
  double change = std::abs(axis.of(JointVector(step.end.rate_rate - step.begin.rate_rate)));
  if (axis.speed)
    change += *axis.speed * std::abs(step.end.fraction_rate_rate - step.begin.fraction_rate_rate) *
              context_.duration;
  return 4 * change / step.length + 1e-9;
}

/// Extremes of position and speed, turning points included.
void SegmentChecker::tally(std::size_t index, const Step& step) {
  const Axis& axis = context_.axes[index];
  AxisTally& t = tallies_[index];
  const double a = axis.of(step.begin.q);
  const double b = axis.of(step.end.q);
  if (!t.any) {
    t.min = t.max = a;
    t.any = true;
  }
  t.min = std::min({t.min, a, b});
  t.max = std::max({t.max, a, b});
  const double rate_a = axis.of(step.begin.rate);
  const double rate_b = axis.of(step.end.rate);
  t.travel += std::abs(b - a);
  if (rate_a * rate_b < 0 && std::abs(rate_a - rate_b) > slope_noise * std::abs(b)) {
    const Spot begin{0, step.begin};
    const Spot end{step.length, step.end};
    const Spot turn =
        root_between(sampler_, step, begin, end, [&](const Spot& s) { return axis.of(s.node.rate); });
    show_extreme(step, turn.node);
    const double q = axis.of(turn.node.q);
    t.min = std::min(t.min, q);
    t.max = std::max(t.max, q);
    t.travel += std::abs(q - a) + std::abs(b - q) - std::abs(b - a);
  }
  if (!axis.speed || rate_scale_ == 0) return;
  const auto take = [&](const Node& node) {
    if (at_fold(step, node)) return;
    const double speed = axis.of(node.rate) / node.fraction_rate * rate_scale_;
    const double ratio = std::abs(speed) / *axis.speed;
    double& bin = ratio_profile_[static_cast<std::size_t>(
        std::clamp(static_cast<int>(node.fraction * profile_bins), 0, profile_bins - 1))];
    bin = std::max(bin, ratio);
    if (ratio > t.peak_ratio) {
      t.peak_ratio = ratio;
      t.peak_speed = speed;
    }
  };
  // The begin was the end of the step before, but for the first one and after a gap.
  if (fresh_ || step.kind != Step::Kind::fraction) take(step.begin);
  take(step.end);
  // d(rate / fraction_rate)/dt has the sign of this; a peak between the nodes is one where |speed| rises,
  // then falls.
  const auto slope = [&](const Spot& s) { return speed_slope(axis, s.node); };
  const double side = rate_a + rate_b > 0 ? 1.0 : -1.0;
  const double slope_a = side * speed_slope(axis, step.begin);
  const double slope_b = side * speed_slope(axis, step.end);
  if (slope_a > 0 && slope_b < 0 && !at_fold(step, step.begin) && !at_fold(step, step.end)) {
    const double rise =
        std::max(std::abs(rate_a / step.begin.fraction_rate), std::abs(rate_b / step.end.fraction_rate)) +
        std::max(slope_a / std::pow(step.begin.fraction_rate, 2),
                 -slope_b / std::pow(step.end.fraction_rate, 2)) *
            step.length;
    if (rise * rate_scale_ / *axis.speed > t.peak_ratio) {
      const Spot begin{0, step.begin};
      const Spot end{step.length, step.end};
      Spot top;
      if (extreme_between(sampler_, step, begin, end, slope, top)) {
        take(top.node);
        show_extreme(step, top.node);
      }
    }
  }
}

void SegmentChecker::check_axis(std::size_t index, const Step& step) {
  const auto [first, last] = watch_range_[index];
  if (first == last) return;
  const Axis& axis = context_.axes[index];
  const double reach = axis.reach(context_.arm.chain.characteristic_length());
  const double h = step.length;
  const bool by_fraction = step.kind == Step::Kind::fraction;
  const double position_slack = by_fraction ? reach * step.second_bound * h * h / 8 : 0;
  const double a = axis.of(step.begin.q);
  const double b = axis.of(step.end.q);
  const double low = std::min(a, b) - position_slack;
  const double high = std::max(a, b) + position_slack;
  const double rate_a = axis.of(step.begin.rate);
  const double rate_b = axis.of(step.end.rate);
  const double fastest =
      (0.5 * (std::abs(rate_a) + std::abs(rate_b)) + 0.5 * h * reach * step.second_bound) * rate_scale_;
  const double third = third_bound(axis, step);
  const double strongest =
      0.5 * (std::abs(axis.of(step.begin.rate_rate)) + std::abs(axis.of(step.end.rate_rate)) + h * third) *
      rate_scale_ * rate_scale_;
  // Taking away a hair of the arc keeps joints that only round to a motion from counting as fast at a fold.
  const double hair = by_fraction ? 0.0 : still * reach * rate_scale_;
  for (std::size_t w = first; w < last; ++w) {
    Watch& watch = watches_[w];
    const double sign = watch.sign;
    const double level = watch.level;
    if (watch.code == Code::joint_limit || watch.code == Code::limit_margin) {
      if (by_fraction && !watch.open && (sign > 0 ? high : -low) < level) continue;
      const auto value = [&](const Spot& s) { return sign * axis.of(s.node.q) - level; };
      const auto slope = [&](const Spot& s) { return sign * axis.of(s.node.rate); };
      watch_step(watch, step, value, slope, reach * step.second_bound, value, slope);
    } else if (watch.code == Code::joint_speed || watch.code == Code::speed_margin) {
      if (by_fraction && !watch.open && fastest < level) continue;
      watch_step(
          watch, step,
          [&](const Spot& s) {
            return sign * axis.of(s.node.rate) * rate_scale_ - level * s.node.fraction_rate - hair;
          },
          [&](const Spot& s) {
            return sign * axis.of(s.node.rate_rate) * rate_scale_ - level * s.node.fraction_rate_rate;
          },
          third * rate_scale_,
          [&](const Spot& s) { return sign * axis.of(s.node.rate) / s.node.fraction_rate * rate_scale_; },
          [&](const Spot& s) { return sign * speed_slope(axis, s.node); });
    } else {
      // Most steps are far from the limit, which the proven bound on the third derivative shows for nothing.
      if (by_fraction && !watch.open && strongest < level) continue;
      check_acceleration(watch, axis, step, hair);
    }
  }
}

/// Acceleration is (rate / fraction_rate)' / fraction_rate. Its derivative takes the third derivatives from
/// the quintic through the step's ends: they steer the search alone, every value reported is exact.
void SegmentChecker::check_acceleration(Watch& watch, const Axis& axis, const Step& step, double hair) {
  const double square = rate_scale_ * rate_scale_;
  const JerkOfStep jerk(step);
  const double jerk_a = axis.of(jerk.joints(0));
  const double jerk_b = axis.of(jerk.joints(step.length));
  const double fourth = 4 * std::abs(jerk_b - jerk_a) / step.length + 1e-9;
  const double most =
      std::max(std::abs(axis.of(step.begin.rate_rate)), std::abs(axis.of(step.end.rate_rate))) +
      step.length * (std::abs(jerk_a) + std::abs(jerk_b) + step.length * fourth);
  if (step.kind == Step::Kind::fraction && !watch.open && most * square < watch.level) return;
  const auto numerator = [&](const Spot& s) { return watch.sign * speed_slope(axis, s.node) * square; };
  const auto numerator_slope = [&](const Spot& s) {
    return watch.sign * square *
           (axis.of(jerk.joints(s.t)) * s.node.fraction_rate - axis.of(s.node.rate) * jerk.fraction(s.t));
  };
  const auto cube = [](const Spot& s) { return std::pow(s.node.fraction_rate, 3); };
  const auto cube_slope = [](const Spot& s) {
    return 3 * s.node.fraction_rate * s.node.fraction_rate * s.node.fraction_rate_rate;
  };
  watch_step(
      watch, step, [&](const Spot& s) { return numerator(s) - watch.level * cube(s) - hair * rate_scale_; },
      [&](const Spot& s) { return numerator_slope(s) - watch.level * cube_slope(s); }, fourth * square,
      [&](const Spot& s) { return numerator(s) / cube(s); },
      [&](const Spot& s) { return numerator_slope(s) * cube(s) - numerator(s) * cube_slope(s); });
}

/// Speeds of the joint centres and the TCP: their greatest for the report, and stretches above a reduced
/// speed.
void SegmentChecker::check_points(const Step& step) {
  std::array<double, max_joints> at_end;
  points_.speeds(step.end, step.end_chain, at_end);
  const auto take = [&](const Node& node, const std::array<double, max_joints>& speeds) {
    if (at_fold(step, node)) return;
    const double scale = rate_scale_ / node.fraction_rate;
    for (int i = 0; i < points_.count(); ++i) {
      double& fastest = fastest_[static_cast<std::size_t>(i)];
      fastest = std::max(fastest, speeds[static_cast<std::size_t>(i)] * scale);
    }
  };
  if (samples_ == 0) {
    std::array<double, max_joints> at_begin;
    points_.speeds(step.begin, nullptr, at_begin);
    take(step.begin, at_begin);
  }
  take(step.end, at_end);
  for (Watch& watch : point_watches_) {
    const auto speed = [&](const Spot& s) {
      return points_.at(s.node)[static_cast<std::size_t>(watch.point)];
    };
    const auto score = [&](const Spot& s) { return speed(s).value / s.node.fraction_rate * rate_scale_; };
    const auto slope = [&](const Spot& s) {
      return speed(s).slope * rate_scale_ - watch.level * s.node.fraction_rate_rate;
    };
    // No proven bound: four times the mean second derivative over the step stands in for its greatest.
    const double second =
        4 * std::abs(slope({step.length, step.end}) - slope({0, step.begin})) / step.length +
        1e-9 * watch.level;
    watch_step(
        watch, step,
        [&](const Spot& s) { return speed(s).value * rate_scale_ - watch.level * s.node.fraction_rate; },
        slope, second, score,
        [&](const Spot& s) {
          const PointSpeeds::Speed at = speed(s);
          return at.slope * s.node.fraction_rate - at.value * s.node.fraction_rate_rate;
        });
  }
}

std::pair<int, double> SegmentChecker::fastest_point() const {
  std::pair<int, double> out{-1, 0.0};
  for (int i = 0; i + 1 < points_.count(); ++i) {
    const double speed = fastest_[static_cast<std::size_t>(i)];
    if (out.first < 0 || speed > out.second) out = {i, speed};
  }
  return out;
}

template <typename F, typename D, typename S, typename E>
void SegmentChecker::watch_step(Watch& watch, const Step& step, F value, D slope, double bound, S score,
                                E score_slope) {
  const Spot begin{0, step.begin};
  const Spot end{step.length, step.end};
  std::vector<Spot> spots;
  crossings(sampler_, step, begin, end, value, slope, bound, spots);
  spots.push_back(end);
  Spot from = begin;
  const double at_begin = value(begin);
  const double at_end = value(end);
  // The side on which the first stretch lies, told by the end that is further from zero; every crossing
  // changes it.
  bool offending = spots.size() % 2 == 1
                       ? (std::abs(at_begin) > std::abs(at_end) ? at_begin : at_end) > 0
                       : (std::abs(at_begin) > std::abs(at_end) ? at_begin > 0 : !(at_end > 0));
  for (std::size_t i = 0; i < spots.size(); ++i) {
    const Spot& to = spots[i];
    if (offending) {
      if (!watch.open) open(watch, from.node);
      for (const Spot* spot : std::array<const Spot*, 2>{&from, &to}) {
        if (is_rate(watch.code) && at_fold(step, spot->node)) {
          if (!watch.unbounded) {
            watch.unbounded = true;
            watch.peak = spot->node.fraction;
            watch.joints = spot->node.q;
          }
        } else {
          widen(watch, spot->node, score(*spot));
        }
      }
      Spot top;
      if (!watch.unbounded && score_slope(from) > 0 && score_slope(to) < 0 &&
          extreme_between(sampler_, step, from, to, score_slope, top)) {
        widen(watch, top.node, score(top));
        show_extreme(step, top.node);
      }
      if (i + 1 < spots.size()) close(watch, to.node.fraction);
    } else if (watch.open) {
      close(watch, from.node.fraction);
    }
    offending = !offending;
    from = to;
  }
}

void SegmentChecker::check_proof(const Step& step) {
  if (step.proven) {
    proven_length_ += std::max(0.0, step.end.fraction - step.begin.fraction);
    close(unproven_, step.begin.fraction);
    return;
  }
  if (!unproven_.open) open(unproven_, step.begin);
}

template <typename F>
void SegmentChecker::with_sample(const Step& step, const Node& node, double position_residual,
                                 double orientation_residual, F tell) {
  const JointVector speeds = at_fold(step, node)
                                 ? JointVector(JointVector::Constant(node.q.size(), std::nan("")))
                                 : JointVector(node.rate * (rate_scale_ / node.fraction_rate));
  const std::string branch = context_.arm.branches.signs(node.q);
  const Pose tcp = context_.arm.chain.forward(node.q);
  tell(TraceSample{context_.index, node.fraction, context_.path_length + context_.length_at(node.fraction),
                   context_.path_time + node.fraction * context_.duration, node.q, speeds,
                   singular_value(node.q), branch, position_residual, orientation_residual, tcp});
}

void SegmentChecker::trace(const Step& step, double position_residual, double orientation_residual) {
  if (!is_traced()) return;
  const auto send = [&](const Node& node) {
    with_sample(step, node, position_residual, orientation_residual,
                [&](const TraceSample& sample) { observer_->sample(sample); });
  };
  if (samples_ == 0) {
    send(step.begin);
  } else if (anew_) {
    show_extreme(step, step.begin);
  }
  anew_ = false;
  send(step.end);
}

void SegmentChecker::show_extreme(const Step& step, const Node& node) {
  if (is_traced())
    with_sample(step, node, 0, 0, [&](const TraceSample& sample) { observer_->extreme(sample); });
}

}  // namespace pathvet
