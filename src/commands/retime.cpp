#include "commands/retime.hpp"

#include <fmt/format.h>
#include <spdlog/spdlog.h>

#include <algorithm>
#include <filesystem>
#include <memory>

#include "commands/errors.hpp"
#include "commands/log.hpp"
#include "commands/outputs.hpp"
#include "commands/progress.hpp"
#include "commands/signals.hpp"
#include "commands/terminal.hpp"
#include "pathvet/reporting/retime_report.hpp"
#include "pathvet/xml/read.hpp"
#include "pathvet/xml/rewrite.hpp"

namespace pathvet::commands {
namespace {

namespace fs = std::filesystem;

class Watcher : public CheckObserver {
 public:
  explicit Watcher(ProgressBar& bar) : bar_(bar) {}
  bool progress(double share) override {
    bar_.show(share);
    return !stop_requested();
  }

 private:
  ProgressBar& bar_;
};

struct Input {
  PathAndCell files;
  std::string text;
};

Input read_input(const RetimeSettings& settings) {
  spdlog::info("reading {}", settings.path);
  Reading<PathAndCell> reading = read_path(settings.path, settings.cell);
  if (!reading.value) throw InputError(std::move(reading.faults));
  std::optional<std::string> text = read_text(settings.path);
  if (!text) throw InputError({{settings.path, {1, 1}, "cannot read the file"}});
  // The cell is known only now; that an output is it has to be found before it is opened.
  std::vector<std::string> problems = output_problems(settings.outputs(), {reading.value->path.cell_file});
  if (!problems.empty()) throw CallError("retime", std::move(problems));
  return {std::move(*reading.value), std::move(*text)};
}

fs::path folder_of(const std::string& file) {
  std::error_code ignored;
  return fs::weakly_canonical(fs::absolute(file, ignored), ignored).parent_path();
}

/// The path names its cell from its own folder: written into another one, it has to name it from there.
std::string with_moved_cell(const std::string& text, const RetimeSettings& settings) {
  const std::string& target = settings.output->target;
  const fs::path from = folder_of(settings.path);
  if (target == "-" || folder_of(target) == from) return text;
  PathRewriter rewriter(text);
  const std::string cell = rewriter.attribute(-1, "cell").value_or("");
  // Names with characters that XML escapes, and absolute ones, stay as they are.
  if (cell.empty() || cell.find('&') != std::string::npos || fs::path(cell).is_absolute()) return text;
  std::error_code failed;
  const fs::path moved = fs::relative(fs::weakly_canonical(from / cell, failed), folder_of(target), failed);
  const std::string name = moved.generic_string();
  if (failed || name.empty() || name.find_first_of("&<\"'") != std::string::npos) return text;
  rewriter.set_attribute(-1, "cell", name);
  return rewriter.text();
}

std::unique_ptr<Output> open(const std::optional<OutputRequest>& request) {
  return request ? std::make_unique<Output>(request->target) : nullptr;
}

/// Whether a path has an error that its time-optimal profile does not do away with.
bool stays_flagged(const PathResult& result) {
  return std::ranges::any_of(result.findings, [](const Finding& f) {
    const bool timed = (f.code == Code::joint_speed && !f.unbounded) || f.code == Code::joint_acceleration;
    return level(f.code) == Level::error && !timed;
  });
}

RetimeReport work(const RetimeSettings& settings, const Input& input) {
  const auto& [path, cell] = input.files;
  ProgressBar bar(!settings.quiet);
  Watcher watcher(bar);
  spdlog::info("checking {}", path.file);
  Reading<Recording> recording = record_path(path, cell, settings.options.check, &watcher);
  if (stop_requested()) throw Stopped();
  if (!recording.value) throw InputError(std::move(recording.faults));
  RetimeReport report;
  report.tool_version = PATHVET_VERSION;
  report.file = settings.path;
  report.by = settings.by;
  report.options = settings.options;
  report.before = recording.value->result;
  report.flagged = stays_flagged(report.before);
  if (settings.profile) {
    report.profile = time_optimal_profile(*recording.value, path, cell,
                                          {settings.options.reserve, settings.options.faster, 1});
  }
  if (settings.output) {
    report.output = settings.output->target;
    Reading<Retiming> retiming = retime(*recording.value, input.text, path, cell, settings.options, &watcher);
    if (stop_requested()) throw Stopped();
    if (!retiming.value) throw InputError(std::move(retiming.faults));
    report.retiming = std::move(*retiming.value);
    report.flagged = report.retiming->is_flagged();
  }
  return report;
}

}  // namespace

int run_retime(const RetimeSettings& settings) {
  start_log(settings.log_level);
  const Input input = read_input(settings);
  const auto written = open(settings.output);
  const auto table = open(settings.profile);
  const auto json = open(settings.json);
  const RetimeReport report = work(settings, input);
  if (written) written->stream() << with_moved_cell(report.retiming->text, settings);
  if (table) write_profile_csv(*report.profile, input.files.cell.arm, table->stream());
  if (json) write_retime_json(report, json->stream());
  for (Output* output : {written.get(), table.get(), json.get()}) {
    if (output) output->finish();
  }
  if (stop_requested()) throw Stopped();
  for (Output* output : {written.get(), table.get(), json.get()}) {
    if (output) output->commit();
  }
  if (settings.wants_text()) {
    Output text("-");
    write_retime_text(report, text.stream(), style_of_standard_output());
    text.finish();
  }
  return report.flagged ? 1 : 0;
}

}  // namespace pathvet::commands
