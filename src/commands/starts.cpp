#include "commands/starts.hpp"

#include <fmt/format.h>
#include <spdlog/spdlog.h>

#include <algorithm>
#include <boost/program_options/value_semantic.hpp>
#include <memory>
#include <sstream>

#include "commands/errors.hpp"
#include "commands/log.hpp"
#include "commands/outputs.hpp"
#include "commands/progress.hpp"
#include "commands/signals.hpp"
#include "commands/terminal.hpp"
#include "pathvet/checks/rank_starts.hpp"
#include "pathvet/reporting/starts.hpp"
#include "pathvet/xml/read.hpp"
#include "pathvet/xml/rewrite.hpp"

namespace pathvet::commands {
namespace {

namespace po = boost::program_options;

po::options_description starts_options() {
  po::options_description files("Input and output");
  files.add_options()  //
      ("cell", po::value<std::string>()->value_name("FILE"),
       "the cell, instead of the one that the path names")  //
      ("json", po::value<std::string>()->value_name("FILE"),
       "write the ranking as JSON (- is standard output)")  //
      ("take", po::value<std::string>()->value_name("N"),
       "write the path with start number N of the table filled in, to --output")  //
      ("output", po::value<std::string>()->value_name("FILE"),
       "where the path with the start taken goes (- is standard output)")  //
      ("quiet", "no text on standard output");
  po::options_description all;
  all.add(files).add(tolerance_options()).add(common_options());
  return all;
}

std::string with_start(const StartsSettings& settings, const Arm& arm, const JointVector& start) {
  const auto text = read_text(settings.path);
  if (!text) throw OutputError(fmt::format("{} can't be read any more", settings.path));
  PathRewriter rewriter(*text);
  rewriter.set_joints(0, start, arm);
  return rewriter.text();
}

}  // namespace

std::vector<OutputRequest> StartsSettings::outputs() const {
  std::vector<OutputRequest> all;
  for (const auto& request : {json, output}) {
    if (request) all.push_back(*request);
  }
  return all;
}

bool StartsSettings::wants_text() const {
  return !quiet &&
         std::ranges::none_of(outputs(), [](const OutputRequest& request) { return request.target == "-"; });
}

std::string starts_help() {
  std::ostringstream text;
  text << "Usage: pathvet starts PATH [options]\n\n"
          "Runs the whole path from every configuration of its start pose that lies inside the limits, whole "
          "turns\n"
          "included, and ranks them: fewest errors, then warnings, then smallest joint speed ratio, then "
          "most room.\n"
          "Exit status: 0 the best start (or the one taken) has no error, 1 it has, 2 the call or an input "
          "file is\n"
          "wrong, 3 not done.\n\n"
          "Examples:\n"
          "  pathvet starts trim.xml\n"
          "  pathvet starts trim.xml --take 1 --output trim-started.xml\n\n"
       << starts_options();
  return text.str();
}

Setup<StartsSettings> setup_starts(const Arguments& arguments) {
  OptionValues values(arguments, starts_options());
  Setup<StartsSettings> setup;
  StartsSettings& settings = setup.settings;
  setup.wants_help = values.has("help");
  settings.cell = values.text("cell");
  settings.options = read_check_options(values);
  settings.quiet = values.has("quiet");
  settings.json = read_output(values, "json");
  settings.output = read_output(values, "output");
  settings.take = values.whole_number("take");
  settings.log_level = read_log_level(values);
  if (values.positional().size() == 1) {
    settings.path = values.positional().front();
  } else {
    values.problem(values.positional().empty() ? "no path file is named" : "starts takes one path at a time");
  }
  if (settings.take && *settings.take < 1) values.problem("--take counts from 1");
  if (values.has("take") != values.has("output")) values.problem("--take and --output go together");
  check_standard_output(values, settings.outputs());
  setup.problems = values.problems();
  return setup;
}

std::vector<std::string> file_problems(const StartsSettings& settings) {
  if (settings.path.empty()) return {};
  std::vector<std::string> inputs{settings.path};
  if (settings.cell) inputs.push_back(*settings.cell);
  std::vector<std::string> problems = output_problems(settings.outputs(), inputs);
  const std::vector<std::string> unreadable = input_problems(inputs);
  problems.insert(problems.end(), unreadable.begin(), unreadable.end());
  return problems;
}

int run_starts(const StartsSettings& settings) {
  start_log(settings.log_level);
  spdlog::info("reading {}", settings.path);
  Reading<PathAndCell> reading = read_path(settings.path, settings.cell);
  if (!reading.value) throw InputError(std::move(reading.faults));
  const auto& [path, cell] = *reading.value;
  std::vector<std::string> problems = output_problems(settings.outputs(), {settings.path, path.cell_file});
  if (!problems.empty()) throw CallError("starts", std::move(problems));

  ProgressBar bar(!settings.quiet);
  Reading<StartRanking> ranked = rank_starts(path, cell, settings.options, [&bar](double share) {
    bar.show(share);
    return !stop_requested();
  });
  if (stop_requested()) throw Stopped();
  if (!ranked.value) throw InputError(std::move(ranked.faults));
  const StartRanking& ranking = *ranked.value;
  if (settings.take && static_cast<std::size_t>(*settings.take) > ranking.trials.size())
    throw CallError("starts",
                    {fmt::format("--take {}: there are {} starts", *settings.take, ranking.trials.size())});

  std::vector<std::unique_ptr<Output>> files;
  if (settings.json) {
    files.push_back(std::make_unique<Output>(settings.json->target));
    write_starts_json(ranking, files.back()->stream());
  }
  const std::size_t chosen = settings.take ? static_cast<std::size_t>(*settings.take) - 1 : 0;
  if (settings.output) {
    files.push_back(std::make_unique<Output>(settings.output->target));
    files.back()->stream() << with_start(settings, cell.arm, ranking.trials[chosen].joints);
  }
  for (const auto& file : files) file->finish();
  for (const auto& file : files) file->commit();
  if (settings.wants_text()) {
    Output text("-");
    write_starts_text(ranking, text.stream(), style_of_standard_output());
    text.finish();
  }
  return ranking.trials.empty() || ranking.trials[chosen].errors > 0 ? 1 : 0;
}

}  // namespace pathvet::commands
