#include "joint_move.hpp"

#include <algorithm>
#include <boost/math/quadrature/gauss.hpp>
#include <cmath>

#include "axis.hpp"

namespace pathvet {

JointMove::JointMove(const Arm& arm, const Chain& chain, const JointVector& from, const JointVector& to,
                     double joint_rate)
    : chain_(chain), from_(from), change_(to - from) {
  for (const Axis& axis : axes_of(arm)) {
    if (axis.speed) duration_ = std::max(duration_, std::abs(axis.of(change_)) / (joint_rate * *axis.speed));
  }
  const auto rate = [this](double s) { return twist(s).tail<3>().norm(); };
  for (std::size_t i = 0; i < table; ++i) {
    const double a = static_cast<double>(i) / table;
    const double b = static_cast<double>(i + 1) / table;
    length_[i + 1] = length_[i] + way(a, b);
    turn_ += boost::math::quadrature::gauss<double, 15>::integrate(rate, a, b);
  }
}

Vector6 JointMove::twist(double fraction) const {
  return chain_.jacobian(joints(fraction)) * change_;
}

double JointMove::way(double from, double to) const {
  if (!(to > from)) return 0;
  const auto speed = [this](double s) { return twist(s).head<3>().norm(); };
  return boost::math::quadrature::gauss<double, 15>::integrate(speed, from, to);
}

double JointMove::length_at(double fraction) const {
  const auto i = static_cast<std::size_t>(std::clamp(fraction, 0.0, 1.0) * table);
  return length_[i] + way(static_cast<double>(i) / table, fraction);
}

void JointMove::at(const Step& step, double t, Node& out) const {
  out.fraction = step.begin.fraction + t;
  out.fraction_rate = 1;
  out.fraction_rate_rate = 0;
  out.q = joints(out.fraction);
  out.rate = change_;
  out.rate_rate = JointVector::Zero(change_.size());
  out.singular_low = 0;
}

void JointMove::run(const FollowSettings& settings, TrackSink& sink) const {
  double fastest = 0;
  for (std::size_t i = 0; i <= table; ++i) {
    const Vector6 at = twist(static_cast<double>(i) / table);
    fastest = std::max(
        {fastest, at.head<3>().norm() / settings.step_length, at.tail<3>().norm() / settings.step_angle});
  }
  // The fastest of the table is within a few percent of the greatest; a tenth more samples keep the promise.
  const long count = std::max(1L, std::lround(std::ceil(1.1 * fastest)));
  Step step;
  step.proven = true;
  step.rate_bound = change_.norm();
  step.second_bound = step.third_bound = 0;
  at(step, 0, step.begin);
  for (long k = 1; k <= count; ++k) {
    const double fraction = static_cast<double>(k) / static_cast<double>(count);
    step.length = fraction - step.begin.fraction;
    at(step, step.length, step.end);
    step.end.fraction = fraction;
    if (!sink.step(step, 0, 0)) return;
    step.begin = step.end;
  }
}

}  // namespace pathvet
