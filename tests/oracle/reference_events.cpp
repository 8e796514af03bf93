#include "reference_events.hpp"

#include <algorithm>
#include <cmath>

namespace pathvet::test {
namespace {

using Signal = std::function<double(const Sample&)>;

constexpr double hair = 1e-9;  // of a limit: exceeding it by less is touching

/// A place on a track where a signal is greatest or crosses zero.
struct Spot {
  double fraction = 0, value = 0;
};

class Finder {
 public:
  Finder(const ReferenceArm& arm, const ReferenceMotion& motion, const Track& track)
      : arm_(arm), motion_(motion), track_(track) {}

  /// By bisection, between sample i and the next.
  double crossing(const Signal& signal, std::size_t i, double low, double high, double at_low) const {
    for (int k = 0; k < 60 && high - low > 1e-15; ++k) {
      const double middle = 0.5 * (low + high);
      if (middle <= low || middle >= high) break;
      const double value = signal(between(arm_, motion_, track_, i, middle));
      ((value > 0) == (at_low > 0) ? low : high) = middle;
    }
    return 0.5 * (low + high);
  }

  /// Greatest value around sample i by golden section on both neighbouring stretches.
  Spot greatest(const Signal& signal, std::size_t i) const {
    const std::size_t n = track_.samples.size();
    Spot best{track_.samples[i].fraction, signal(track_.samples[i])};
    for (std::size_t k = i > 0 ? i - 1 : 0; k < std::min(i + 1, n - 1); ++k) {
      const Spot spot = golden(signal, k);
      if (spot.value > best.value) best = spot;
    }
    return best;
  }

  [[nodiscard]] const std::vector<Sample>& samples() const { return track_.samples; }

 private:
  Spot golden(const Signal& signal, std::size_t i) const {
    constexpr double share = 0.6180339887498949;
    double low = track_.samples[i].fraction;
    double high = track_.samples[i + 1].fraction;
    const auto at = [&](double fraction) { return signal(between(arm_, motion_, track_, i, fraction)); };
    double a = high - share * (high - low);
    double b = low + share * (high - low);
    double at_a = at(a);
    double at_b = at(b);
    for (int k = 0; k < 45; ++k) {
      if (at_a > at_b) {
        high = b;
        b = a;
        at_b = at_a;
        a = high - share * (high - low);
        at_a = at(a);
      } else {
        low = a;
        a = b;
        at_a = at_b;
        b = low + share * (high - low);
        at_b = at(b);
      }
    }
    return at_a > at_b ? Spot{a, at_a} : Spot{b, at_b};
  }

  const ReferenceArm& arm_;
  const ReferenceMotion& motion_;
  const Track& track_;
};

struct Stretch {
  double begin = 0, end = 0;
  Spot peak;
  bool ambiguous = false;
};

/// Where a signal is above zero. `doubt`: extremes nearer to zero than this could be on either side.
std::vector<Stretch> above(const Finder& finder, const Signal& signal, double doubt) {
  const std::vector<Sample>& samples = finder.samples();
  const std::size_t n = samples.size();
  std::vector<double> values(n);
  for (std::size_t i = 0; i < n; ++i) values[i] = signal(samples[i]);
  struct Change {
    double fraction;
    bool doubtful;
  };
  std::vector<Change> changes;
  std::vector<Spot> tops;
  for (std::size_t i = 0; i < n; ++i) {
    const double left = i > 0 ? values[i - 1] : values[i];
    const double right = i + 1 < n ? values[i + 1] : values[i];
    // Extremes that the samples may have stepped over: refined where a parabola's overshoot could matter.
    const double bend = std::abs(left - 2 * values[i] + right);
    for (const double side : {1.0, -1.0}) {
      const double here = side * values[i];
      if (here < side * left || here < side * right) continue;
      const bool near_zero = here <= 0 && here + 3 * bend + doubt > 0;
      if (side > 0 && here > 0) tops.push_back(finder.greatest(signal, i));
      if (!near_zero || n < 2) continue;
      const Spot top = finder.greatest([&](const Sample& s) { return side * signal(s); }, i);
      if (side > 0) tops.push_back(top);
      if (!(top.value > -doubt)) continue;
      const bool doubtful = std::abs(top.value) < doubt;
      if (top.value <= 0) {
        changes.push_back({top.fraction, doubtful});
        changes.push_back({top.fraction, doubtful});
        continue;
      }
      const std::size_t k = top.fraction < samples[i].fraction ? i - 1 : i;
      if (top.fraction == samples[k].fraction) continue;
      changes.push_back({finder.crossing(signal, k, samples[k].fraction, top.fraction, values[k]), doubtful});
      changes.push_back(
          {finder.crossing(signal, k, top.fraction, samples[k + 1].fraction, -values[k]), doubtful});
    }
    if (i + 1 < n && (values[i] > 0) != (right > 0))
      changes.push_back(
          {finder.crossing(signal, i, samples[i].fraction, samples[i + 1].fraction, values[i]), false});
  }
  std::stable_sort(changes.begin(), changes.end(),
                   [](const Change& a, const Change& b) { return a.fraction < b.fraction; });
  std::vector<Stretch> out;
  bool on = values[0] > 0;
  Change from{samples[0].fraction, false};
  changes.push_back({samples[n - 1].fraction, false});
  for (const Change& change : changes) {
    if (on || change.doubtful) {
      Stretch s{from.fraction, change.fraction, {}, from.doubtful || change.doubtful};
      s.peak.value = -1e300;
      const auto take = [&](const Spot& spot) {
        if (spot.fraction < s.begin - 1e-12 || spot.fraction > s.end + 1e-12) return;
        if (spot.value > s.peak.value) s.peak = spot;
      };
      for (const Spot& top : tops) take(top);
      for (std::size_t i = 0; i < n; ++i) take({samples[i].fraction, values[i]});
      if (s.peak.value < -1e299) s.peak = {0.5 * (s.begin + s.end), 0};
      if (s.end > s.begin || n == 1 || s.ambiguous) out.push_back(s);
    }
    on = !on;
    from = change;
  }
  return out;
}

struct Axis {
  std::vector<std::pair<int, double>> terms;
  bool turns = true;
  std::optional<double> lower, upper, speed;
  [[nodiscard]] double of(const Column& q) const {
    double sum = 0;
    for (const auto& [joint, factor] : terms) sum += factor * q[joint];
    return sum;
  }
};

std::vector<Axis> axes_of(const Arm& arm) {
  std::vector<Axis> out;
  for (int i = 0; i < arm.joint_count(); ++i) {
    const Joint& joint = arm.joints[static_cast<std::size_t>(i)];
    Axis axis{{{i, 1.0}}, joint.type == JointType::revolute, {}, {}, joint.speed};
    if (!joint.continuous) {
      axis.lower = joint.lower;
      axis.upper = joint.upper;
    }
    out.push_back(axis);
  }
  for (const CombinedLimit& limit : arm.combined_limits) {
    Axis axis{{}, limit.type == JointType::revolute, limit.lower, limit.upper, limit.speed};
    for (const auto& term : limit.terms) axis.terms.emplace_back(term.joint, term.factor);
    out.push_back(axis);
  }
  return out;
}

}  // namespace

Events events(const ReferenceArm& arm, const ReferenceMotion& motion, const Track& track,
              const CheckOptions& options) {
  const Finder finder(arm, motion, track);
  const double duration = motion.duration();
  const bool stuck = track.end == TrackEnd::stuck;
  const double last = track.samples.back().fraction;
  Events out;
  const std::vector<Axis> axes = axes_of(arm.model());
  for (int index = 0; index < static_cast<int>(axes.size()); ++index) {
    const Axis& axis = axes[static_cast<std::size_t>(index)];
    const auto add = [&](Code code, const Signal& signal, double scale, auto value) {
      for (const Stretch& s : above(finder, signal, 1e-9 * scale)) {
        Expected e{code, index, s.begin, s.end, s.peak.fraction, value(s.peak.value), false, s.ambiguous};
        const bool rate = code == Code::joint_speed || code == Code::speed_margin;
        e.unbounded = rate && stuck && s.end == last;
        if (s.peak.value < 1e-8 * scale) e.ambiguous = true;
        out.findings.push_back(e);
      }
    };
    const double margin = axis.turns ? options.limit_margin_angle : options.limit_margin_length;
    for (const double sign : {1.0, -1.0}) {
      if (axis.lower) {
        const double limit = sign > 0 ? *axis.upper : *axis.lower;
        const double error_level = sign * limit + hair * std::abs(limit);
        add(
            Code::joint_limit, [&, sign](const Sample& s) { return sign * axis.of(s.q) - error_level; },
            axis.turns ? 1.0 : arm.length(), [&](double top) { return sign * (top + error_level); });
        const double margin_level = sign * limit - margin;
        add(
            Code::limit_margin, [&, sign](const Sample& s) { return sign * axis.of(s.q) - margin_level; },
            axis.turns ? 1.0 : arm.length(), [&](double top) { return sign * limit - (top + margin_level); });
      }
      if (axis.speed && duration > 0) {
        const auto speed = [&, sign](const Sample& s) { return sign * axis.of(s.rate) / duration; };
        add(
            Code::joint_speed, [&](const Sample& s) { return speed(s) - *axis.speed * (1 + hair); },
            *axis.speed, [&](double top) { return sign * (top + *axis.speed * (1 + hair)); });
        const double level = options.speed_margin * *axis.speed;
        add(
            Code::speed_margin, [&](const Sample& s) { return speed(s) - level; }, *axis.speed,
            [&](double top) { return sign * (top + level); });
      }
    }
    Motions m;
    const std::vector<Sample>& samples = track.samples;
    m.min = m.max = axis.of(samples[0].q);
    for (std::size_t i = 0; i < samples.size(); ++i) {
      const double q = axis.of(samples[i].q);
      m.min = std::min(m.min, q);
      m.max = std::max(m.max, q);
      if (axis.speed && duration > 0)
        m.peak_ratio = std::max(m.peak_ratio, std::abs(axis.of(samples[i].rate)) / duration / *axis.speed);
      if (i == 0) continue;
      const double before = axis.of(samples[i - 1].q);
      m.travel += std::abs(q - before);
      const double rate = axis.of(samples[i - 1].rate);
      if (rate * axis.of(samples[i].rate) < 0) {
        const double side = rate > 0 ? 1.0 : -1.0;
        const double turn =
            side * finder.greatest([&](const Sample& s) { return side * axis.of(s.q); }, i).value;
        m.min = std::min(m.min, turn);
        m.max = std::max(m.max, turn);
        m.travel += std::max(0.0, std::abs(turn - before) + std::abs(q - turn) - std::abs(q - before));
      }
    }
    for (std::size_t i = 1; axis.speed && duration > 0 && i + 1 < samples.size(); ++i) {
      const auto ratio = [&](const Sample& s) { return std::abs(axis.of(s.rate)) / duration / *axis.speed; };
      const double here = ratio(samples[i]);
      if (here > 0.9 * m.peak_ratio && here >= ratio(samples[i - 1]) && here >= ratio(samples[i + 1]))
        m.peak_ratio = std::max(m.peak_ratio, finder.greatest(ratio, i).value);
    }
    out.axes.push_back(m);
  }
  const auto low = [&](const Sample& s) { return options.singular_below - s.singular; };
  for (const Stretch& s : above(finder, low, 1e-9)) {
    out.findings.push_back({Code::singular_pass, -1, s.begin, s.end, s.peak.fraction,
                            options.singular_below - s.peak.value, false,
                            s.ambiguous || s.peak.value < 1e-8});
  }
  out.least_singular = 1e300;
  for (const Sample& s : track.samples) out.least_singular = std::min(out.least_singular, s.singular);
  const std::vector<Sample>& all = track.samples;
  for (std::size_t i = 1; i + 1 < all.size(); ++i) {
    if (all[i].singular > all[i - 1].singular || all[i].singular > all[i + 1].singular) continue;
    if (all[i].singular - 0.5 * std::max(all[i - 1].singular, all[i + 1].singular) < out.least_singular)
      out.least_singular =
          std::min(out.least_singular, options.singular_below - finder.greatest(low, i).value);
  }
  std::erase_if(out.findings, [&](const Expected& f) {
    return std::any_of(out.findings.begin(), out.findings.end(), [&](const Expected& other) {
      const bool match = (f.code == Code::limit_margin && other.code == Code::joint_limit) ||
                         (f.code == Code::speed_margin && other.code == Code::joint_speed);
      return match && f.axis == other.axis && f.begin <= other.end && other.begin <= f.end &&
             !other.ambiguous;
    });
  });
  return out;
}

}  // namespace pathvet::test
