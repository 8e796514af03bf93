#include <fmt/format.h>

#include <algorithm>
#include <boost/program_options/value_semantic.hpp>
#include <sstream>

#include "commands/outputs.hpp"
#include "commands/retime.hpp"

namespace pathvet::commands {
namespace {

namespace po = boost::program_options;

constexpr double percent = 0.01;

po::options_description retime_options() {
  const auto value = [](const char* shown) { return po::value<std::string>()->value_name(shown); };
  po::options_description files("Input and output");
  files.add_options()  //
      ("output", value("FILE"),
       "write the path with speeds that hold (may be the input itself; - is standard output)")  //
      ("cell", value("FILE"), "the cell, instead of the one that the path names")               //
      ("profile", value("FILE"), "write the time-optimal profile as CSV")                       //
      ("json", value("FILE"), "write the account as JSON (- is standard output)")               //
      ("quiet", "no text on standard output");
  po::options_description how("How");
  how.add_options()  //
      ("by", value("HOW"),
       "segment: one speed for each segment; stretch (default): segments are cut at extra waypoints where "
       "that "
       "saves time; profile: the time-optimal speed along the path, as a table (--profile; --output, "
       "if given, gets stretches)")                                                     //
      ("most-cuts", value("N"), "at most N extra waypoints in a segment (default 8)")   //
      ("reserve", value("PERCENT"), "keep this share of every limit free (default 0)")  //
      ("faster", "speeds may rise above the programmed ones");
  po::options_description all;
  all.add(files).add(how).add(tolerance_options()).add(common_options());
  return all;
}

void read_how(OptionValues& values, RetimeSettings& settings) {
  settings.by = values.text("by").value_or("stretch");
  if (settings.by != "segment" && settings.by != "stretch" && settings.by != "profile")
    values.problem(fmt::format("--by must be segment, stretch or profile, not '{}'", settings.by));
  if (const auto cuts = values.whole_number("most-cuts")) settings.options.most_cuts = *cuts;
  if (settings.by == "segment") {
    if (values.has("most-cuts")) values.problem("--most-cuts goes with --by stretch");
    settings.options.most_cuts = 0;
  }
  if (const auto reserve = values.number("reserve")) settings.options.reserve = *reserve * percent;
  settings.options.faster = values.has("faster");
  for (std::string& problem : settings.options.problems()) values.problem(std::move(problem));
}

}  // namespace

std::vector<OutputRequest> RetimeSettings::outputs() const {
  std::vector<OutputRequest> all;
  for (const auto& one : {output, profile, json}) {
    if (one) all.push_back(*one);
  }
  return all;
}

bool RetimeSettings::wants_text() const {
  return !quiet &&
         std::ranges::none_of(outputs(), [](const OutputRequest& one) { return one.target == "-"; });
}

std::string retime_help() {
  std::ostringstream text;
  text << "Usage: pathvet retime PATH --output FILE [options]\n\n"
          "Finds speeds at which the joints' speed limits (and, inside segments, acceleration limits) hold, "
          "writes\n"
          "the path with them, checks what it wrote, and tells what it costs against the least time "
          "possible.\n"
          "Exit status: 0 what was written has no error, 1 it has, 2 the call or an input file is wrong, 3 "
          "not done.\n"
       << retime_options();
  return text.str();
}

Setup<RetimeSettings> setup_retime(const Arguments& arguments) {
  OptionValues values(arguments, retime_options());
  Setup<RetimeSettings> setup;
  RetimeSettings& settings = setup.settings;
  setup.wants_help = values.has("help");
  if (values.positional().size() != 1) {
    values.problem(values.positional().empty() ? "no path file is named" : "one path at a time is re-timed");
  } else {
    settings.path = values.positional().front();
    if (settings.path == "-") values.problem("a path can't be read from standard input; name a file");
  }
  settings.cell = values.text("cell");
  settings.options.check = read_check_options(values);
  read_how(values, settings);
  settings.quiet = values.has("quiet");
  settings.output = read_output(values, "output");
  settings.profile = read_output(values, "profile");
  settings.json = read_output(values, "json");
  settings.log_level = read_log_level(values);
  if (settings.by == "profile" && !values.has("profile")) values.problem("--by profile needs --profile FILE");
  if (settings.by != "profile" && !values.has("output")) values.problem("--output is missing");
  check_standard_output(values, settings.outputs());
  setup.problems = values.problems();
  return setup;
}

std::vector<std::string> file_problems(const RetimeSettings& settings) {
  std::vector<std::string> inputs;
  if (!settings.path.empty()) inputs.push_back(settings.path);
  if (settings.cell) inputs.push_back(*settings.cell);
  // The path itself may be what --output names, and nothing else.
  std::vector<std::string> problems;
  for (const std::string& problem : output_problems(settings.outputs(), inputs)) {
    const bool is_own_input =
        settings.output && problem == fmt::format("--output: '{}' is an input file", settings.output->target);
    const bool is_cell =
        settings.cell && is_own_input && !output_problems({*settings.output}, {*settings.cell}).empty();
    if (!is_own_input || is_cell) problems.push_back(problem);
  }
  const std::vector<std::string> unreadable = input_problems(inputs);
  problems.insert(problems.end(), unreadable.begin(), unreadable.end());
  return problems;
}

}  // namespace pathvet::commands
