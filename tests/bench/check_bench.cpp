// What one sample costs, all in one run and on the same poses, so that the ratios mean something on any
// machine:
//   floor     the bare forward map with Jacobian of the six-joint arm
//   KDL       inverse kinematics of the same poses by Orocos KDL, Newton-Raphson with an SVD velocity solver
//   check     the whole check: tracking, speeds, limits, singular values, findings
#include <benchmark/benchmark.h>

#include <cstdio>
#include <cstdlib>
#include <kdl/chain.hpp>
#include <kdl/chainfksolverpos_recursive.hpp>
#include <kdl/chainiksolverpos_nr.hpp>
#include <kdl/chainiksolvervel_pinv.hpp>
#include <map>
#include <string>
#include <vector>

#include "pathvet/checks/check_path.hpp"
#include "pathvet/kinematics/chain.hpp"
#include "pathvet/xml/read.hpp"
#include "support/kdl_frames.hpp"

namespace pathvet {
namespace {

/// Keeps the configuration of every sample.
class JointCollector : public CheckObserver {
 public:
  [[nodiscard]] bool wants_samples() const override { return true; }
  void sample(const TraceSample& sample) override { joints.push_back(sample.joints); }
  std::vector<JointVector> joints;
};

/// A contour of 2,000 waypoints with its cell, the arm with the path's tool, and the configurations along it.
struct Subject {
  PathAndCell input;
  Pose tool;
  std::vector<JointVector> joints;

  static const Subject& the() {
    static const Subject subject;
    return subject;
  }

 private:
  Subject() {
    const std::string file =
        std::string(PATHVET_SOURCE_DIR) + "/fixtures/paths/clean-flange-contour-2000.xml";
    Reading<PathAndCell> reading = read_path(file);
    for (const Fault& fault : reading.faults) std::fprintf(stderr, "%s\n", to_string(fault).c_str());
    if (!reading.value) std::exit(2);
    input = *reading.value;
    tool = input.cell.tools[static_cast<std::size_t>(input.path.waypoints.front().tool.value())].placement;
    JointCollector collector;
    const auto result = check_path(input.path, input.cell, CheckOptions{}, &collector);
    for (const Fault& fault : result.faults) std::fprintf(stderr, "%s\n", to_string(fault).c_str());
    if (!result.value) std::exit(2);
    joints = collector.joints;
  }
};

void floor(benchmark::State& state) {
  const Subject& subject = Subject::the();
  const Chain chain(subject.input.cell.arm, subject.tool);
  const std::vector<JointColumn<6>> joints(subject.joints.begin(), subject.joints.end());
  ChainState<6> place;
  JacobianMatrix<6> jacobian;
  for ([[maybe_unused]] auto _ : state) {
    for (const JointColumn<6>& q : joints) {
      chain.evaluate<6>(q, place);
      chain.jacobian<6>(place, jacobian);
      benchmark::DoNotOptimize(jacobian);
    }
  }
  state.SetItemsProcessed(state.iterations() * static_cast<std::int64_t>(joints.size()));
}

KDL::Chain kdl_chain(const Arm& arm, const Pose& tool) {
  const auto fixed = [](const Pose& pose) {
    return KDL::Segment(KDL::Joint(KDL::Joint::Fixed), test::to_kdl(pose));
  };
  KDL::Chain chain;
  chain.addSegment(fixed(arm.base));
  for (const Joint& joint : arm.joints) {
    chain.addSegment(fixed(joint.before));
    chain.addSegment(KDL::Segment(KDL::Joint(KDL::Joint::RotZ), test::to_kdl(joint.after)));
  }
  chain.addSegment(fixed(arm.flange * tool));
  return chain;
}

void kdl_newton_raphson_svd(benchmark::State& state) {
  const Subject& subject = Subject::the();
  const Chain ours(subject.input.cell.arm, subject.tool);
  const KDL::Chain chain = kdl_chain(subject.input.cell.arm, subject.tool);
  std::vector<KDL::Frame> poses;
  for (const JointVector& q : subject.joints) poses.push_back(test::to_kdl(ours.forward(q)));
  KDL::ChainFkSolverPos_recursive forward(chain);
  KDL::ChainIkSolverVel_pinv velocity(chain);
  KDL::ChainIkSolverPos_NR solver(chain, forward, velocity, 100, 1e-6);
  KDL::JntArray before(6);
  KDL::JntArray after(6);
  long failures = 0;
  for ([[maybe_unused]] auto _ : state) {
    before = test::to_kdl(subject.joints.front());
    for (const KDL::Frame& pose : poses) {
      if (solver.CartToJnt(before, pose, after) < 0) ++failures;
      before = after;
    }
  }
  state.SetItemsProcessed(state.iterations() * static_cast<std::int64_t>(poses.size()));
  state.counters["failures"] = static_cast<double>(failures);
}

/// Argument: samples per millimetre.
void whole_check(benchmark::State& state) {
  const Subject& subject = Subject::the();
  CheckOptions options;
  options.step_length = 1.0 / static_cast<double>(state.range(0));
  std::int64_t samples = 0;
  for ([[maybe_unused]] auto _ : state) {
    const auto result = check_path(subject.input.path, subject.input.cell, options);
    samples += result.value->samples;
  }
  state.SetItemsProcessed(samples);
}

BENCHMARK(floor)->Unit(benchmark::kMicrosecond);
BENCHMARK(kdl_newton_raphson_svd)->Unit(benchmark::kMicrosecond);
BENCHMARK(whole_check)->Arg(1)->Arg(20)->Unit(benchmark::kMicrosecond);

/// Prints as usual and keeps the time per sample of each.
class RatioReporter : public benchmark::ConsoleReporter {
 public:
  void ReportRuns(const std::vector<Run>& runs) override {
    for (const Run& run : runs) {
      const auto rate = run.counters.find("items_per_second");
      if (run.run_type == Run::RT_Iteration && rate != run.counters.end()) {
        names_.push_back(run.benchmark_name());
        seconds_[run.benchmark_name()] = 1.0 / rate->second.value;
      }
    }
    ConsoleReporter::ReportRuns(runs);
  }

  void print_ratios() const {
    const auto base = seconds_.find("floor");
    if (base == seconds_.end()) return;
    std::printf("\n%-28s %14s %10s\n", "one sample", "microseconds", "floors");
    for (const std::string& name : names_) {
      const double seconds = seconds_.at(name);
      std::printf("%-28s %14.4f %10.2f\n", name.c_str(), 1e6 * seconds, seconds / base->second);
    }
  }

 private:
  std::vector<std::string> names_;
  std::map<std::string, double> seconds_;
};

}  // namespace
}  // namespace pathvet

int main(int argc, char** argv) {
  benchmark::Initialize(&argc, argv);
  if (benchmark::ReportUnrecognizedArguments(argc, argv)) return 2;
  pathvet::RatioReporter reporter;
  benchmark::RunSpecifiedBenchmarks(&reporter);
  reporter.print_ratios();
  return 0;
}
