#include "commands/check.hpp"

#include <fmt/format.h>
#include <spdlog/spdlog.h>

#include <algorithm>
#include <atomic>
#include <boost/program_options/value_semantic.hpp>
#include <memory>
#include <mutex>
#include <sstream>

#include "commands/errors.hpp"
#include "commands/log.hpp"
#include "commands/outputs.hpp"
#include "commands/parallel.hpp"
#include "commands/progress.hpp"
#include "commands/signals.hpp"
#include "commands/terminal.hpp"
#include "pathvet/checks/check_path.hpp"
#include "pathvet/reporting/csv.hpp"
#include "pathvet/reporting/curves.hpp"
#include "pathvet/reporting/html.hpp"
#include "pathvet/reporting/json.hpp"
#include "pathvet/reporting/junit.hpp"
#include "pathvet/reporting/sarif.hpp"
#include "pathvet/reporting/trace.hpp"
#include "pathvet/xml/read.hpp"

namespace pathvet::commands {
namespace {

namespace po = boost::program_options;

po::options_description check_options() {
  po::options_description files("Input and output");
  files.add_options()  //
      ("cell", po::value<std::string>()->value_name("FILE"),
       "the cell, instead of the one that the path names")  //
      ("json", po::value<std::string>()->value_name("FILE"),
       "write the report as JSON (- is standard output)")  //
      ("html", po::value<std::string>()->value_name("FILE"),
       "write the report as one page with charts and a view of the arm")  //
      ("sarif", po::value<std::string>()->value_name("FILE"),
       "write the findings as SARIF, for systems that show them beside the path file")  //
      ("junit", po::value<std::string>()->value_name("FILE"),
       "write a test case for every segment, for build servers")  //
      ("csv", po::value<std::string>()->value_name("FILE"),
       "write the findings as a table for a spreadsheet")                                               //
      ("trace", po::value<std::string>()->value_name("FILE"), "write every sample of one path as CSV")  //
      ("quiet", "no text on standard output")                                                           //
      ("strict", "warnings count towards the verdict and the exit status");
  po::options_description all;
  all.add(files).add(tolerance_options()).add(common_options());
  return all;
}

/// Passes samples to the trace and the page's curves, and the progress to the bar; stops the check on a
/// signal or when the trace can't be written any more.
class Watcher : public CheckObserver {
 public:
  Watcher(ProgressBar& bar, std::mutex& bar_mutex, Output* trace, CurveCollector* curves, const Arm& arm,
          std::size_t count)
      : bar_(bar), bar_mutex_(bar_mutex), trace_(trace), curves_(curves), count_(static_cast<double>(count)) {
    if (trace) writer_.emplace(arm, trace->stream());
  }

  [[nodiscard]] bool wants_samples() const override { return writer_ || curves_; }
  void sample(const TraceSample& sample) override {
    if (writer_) writer_->write(sample);
    if (curves_) curves_->sample(sample);
  }
  void extreme(const TraceSample& sample) override {
    if (curves_) curves_->extreme(sample);
  }
  void begin_segment(const SegmentStart& start) override {
    if (curves_) curves_->begin_segment(start);
  }
  bool progress(double share) override {
    {
      const std::lock_guard lock(bar_mutex_);
      bar_.advance((share - share_) / count_);
      share_ = share;
    }
    return !stop_requested() && !(trace_ && trace_->failed());
  }

 private:
  ProgressBar& bar_;
  std::mutex& bar_mutex_;
  Output* trace_;
  CurveCollector* curves_;
  std::optional<TraceWriter> writer_;
  double count_;
  double share_ = 0;
};

void append(std::vector<Fault>& all, const std::vector<Fault>& more) {
  for (const Fault& fault : more) {
    // A cell that several paths name is read for each of them; its faults are told once.
    const std::string text = to_string(fault);
    if (std::ranges::none_of(all, [&text](const Fault& known) { return to_string(known) == text; })) {
      all.push_back(fault);
    }
  }
}

std::vector<PathAndCell> read_all(const CheckSettings& settings) {
  std::vector<PathAndCell> inputs;
  std::vector<Fault> faults;
  for (const std::string& file : settings.paths) {
    spdlog::info("reading {}", file);
    Reading<PathAndCell> reading = read_path(file, settings.cell);
    append(faults, reading.faults);
    if (reading.value) inputs.push_back(std::move(*reading.value));
  }
  if (!faults.empty()) throw InputError(std::move(faults));
  return inputs;
}

/// The cells are known only now; that an output is one of them has to be found before it is opened.
void check_cells(const CheckSettings& settings, const std::vector<PathAndCell>& inputs) {
  std::vector<std::string> cells;
  for (const PathAndCell& input : inputs) cells.push_back(input.path.cell_file);
  std::vector<std::string> problems = output_problems(settings.outputs(), cells);
  if (!problems.empty()) throw CallError("check", std::move(problems));
}

/// What came of one path.
struct Checked {
  Reading<PathResult> reading;
  std::optional<PathCurves> curves;
};

/// `curves` gets those of each path; null: nobody draws them. The paths share the threads; results keep their
/// order, so that the report is the same whatever their number.
std::vector<PathResult> check_all(const CheckSettings& settings, const std::vector<PathAndCell>& inputs,
                                  Output* trace, std::vector<PathCurves>* curves) {
  std::vector<Checked> checked(inputs.size());
  ProgressBar bar(!settings.quiet);
  std::mutex bar_mutex;
  std::atomic<std::size_t> next = 0;
  const auto work = [&] {
    for (std::size_t i = next++; i < inputs.size() && !stop_requested(); i = next++) {
      const auto& [path, cell] = inputs[i];
      spdlog::info("checking {}", path.file);
      std::optional<CurveCollector> collector;
      if (curves) collector.emplace(path, cell, CurveCollector::most_values / inputs.size());
      Watcher watcher(bar, bar_mutex, trace, collector ? &*collector : nullptr, cell.arm, inputs.size());
      checked[i].reading = check_path(path, cell, settings.options, &watcher);
      if (collector) checked[i].curves = collector->take();
    }
  };
  in_parallel(static_cast<int>(
                  std::min<std::size_t>(inputs.size(), static_cast<std::size_t>(settings.options.threads))),
              work);
  if (stop_requested()) throw Stopped();
  std::vector<PathResult> results;
  std::vector<Fault> faults;
  for (Checked& one : checked) {
    append(faults, one.reading.faults);
    if (one.curves) curves->push_back(std::move(*one.curves));
    if (!one.reading.value) continue;
    spdlog::debug("{}: {} samples, {} findings", one.reading.value->file, one.reading.value->samples,
                  one.reading.value->findings.size());
    results.push_back(std::move(*one.reading.value));
  }
  if (!faults.empty()) throw InputError(std::move(faults));
  return results;
}

std::unique_ptr<Output> open(const std::optional<OutputRequest>& request) {
  return request ? std::make_unique<Output>(request->target) : nullptr;
}

/// Nothing where that medium isn't asked for.
void write(const Report& report, Output* output, void (*writer)(const Report&, std::ostream&)) {
  if (!output) return;
  writer(report, output->stream());
  output->finish();
}

}  // namespace

std::vector<OutputRequest> CheckSettings::outputs() const {
  std::vector<OutputRequest> all;
  for (const auto& output : {json, html, sarif, junit, csv, trace}) {
    if (output) all.push_back(*output);
  }
  return all;
}

bool CheckSettings::wants_text() const {
  return !quiet &&
         std::ranges::none_of(outputs(), [](const OutputRequest& output) { return output.target == "-"; });
}

std::string check_help() {
  std::ostringstream text;
  text << "Usage: pathvet check PATH... [options]\n\n"
          "Checks every path to its end: reach, joint limits and speeds, singularities, branch changes, "
          "jumps.\n"
          "Exit status: 0 nothing at error level, 1 flagged, 2 the call or an input file is wrong, 3 not "
          "done.\n"
       << check_options();
  return text.str();
}

Setup<CheckSettings> setup_check(const Arguments& arguments) {
  OptionValues values(arguments, check_options());
  Setup<CheckSettings> setup;
  CheckSettings& settings = setup.settings;
  setup.wants_help = values.has("help");
  settings.paths = values.positional();
  settings.cell = values.text("cell");
  settings.options = read_check_options(values);
  settings.strict = values.has("strict");
  settings.quiet = values.has("quiet");
  settings.json = read_output(values, "json");
  settings.html = read_output(values, "html");
  settings.sarif = read_output(values, "sarif");
  settings.junit = read_output(values, "junit");
  settings.csv = read_output(values, "csv");
  settings.trace = read_output(values, "trace");
  settings.log_level = read_log_level(values);
  if (settings.paths.empty()) values.problem("no path file is named");
  if (std::ranges::find(settings.paths, "-") != settings.paths.end()) {
    values.problem("a path can't be read from standard input; name a file");
  }
  if (settings.trace && settings.paths.size() > 1) values.problem("--trace takes one path at a time");
  check_standard_output(values, settings.outputs());
  setup.problems = values.problems();
  return setup;
}

std::vector<std::string> file_problems(const CheckSettings& settings) {
  std::vector<std::string> inputs = settings.paths;
  if (settings.cell) inputs.push_back(*settings.cell);
  std::vector<std::string> problems = output_problems(settings.outputs(), inputs);
  const std::vector<std::string> unreadable = input_problems(inputs);
  problems.insert(problems.end(), unreadable.begin(), unreadable.end());
  return problems;
}

int run_check(const CheckSettings& settings) {
  start_log(settings.log_level);
  const std::vector<PathAndCell> inputs = read_all(settings);
  check_cells(settings, inputs);
  const auto json = open(settings.json);
  const auto html = open(settings.html);
  const auto sarif = open(settings.sarif);
  const auto junit = open(settings.junit);
  const auto csv = open(settings.csv);
  const auto trace = open(settings.trace);

  Report report{PATHVET_VERSION, settings.options, settings.strict, {}};
  std::vector<PathCurves> curves;
  report.paths = check_all(settings, inputs, trace.get(), html ? &curves : nullptr);
  if (trace) trace->finish();
  write(report, json.get(), write_json);
  write(report, sarif.get(), write_sarif);
  write(report, junit.get(), write_junit);
  write(report, csv.get(), write_csv);
  if (html) write_html(report, curves, html->stream());
  if (html) html->finish();
  if (stop_requested()) throw Stopped();
  for (Output* output : {json.get(), html.get(), sarif.get(), junit.get(), csv.get(), trace.get()}) {
    if (output) output->commit();
  }
  if (settings.wants_text()) {
    Output text("-");
    write_text(report, text.stream(), style_of_standard_output());
    text.finish();
  }
  return report.exit_status();
}

}  // namespace pathvet::commands
