#include "commands/compare.hpp"

#include <fmt/format.h>

#include <boost/program_options/value_semantic.hpp>
#include <memory>
#include <sstream>

#include "commands/errors.hpp"
#include "commands/outputs.hpp"
#include "commands/terminal.hpp"
#include "pathvet/reporting/compare.hpp"
#include "pathvet/xml/rewrite.hpp"

namespace pathvet::commands {
namespace {

namespace po = boost::program_options;

po::options_description compare_options() {
  po::options_description options("Options");
  options.add_options()  //
      ("json", po::value<std::string>()->value_name("FILE"),
       "write the comparison as JSON (- is standard output)")  //
      ("quiet", "no text on standard output")                  //
      ("help", "show this");
  return options;
}

Reading<SavedReport> read_report(const std::string& file) {
  const std::optional<std::string> text = read_text(file);
  if (!text) throw OutputError(fmt::format("{} can't be read any more", file));
  return read_saved_report(file, *text);
}

}  // namespace

std::vector<OutputRequest> CompareSettings::outputs() const {
  return json ? std::vector{*json} : std::vector<OutputRequest>();
}

bool CompareSettings::wants_text() const {
  return !quiet && !(json && json->target == "-");
}

std::string compare_help() {
  std::ostringstream text;
  text
      << "Usage: pathvet compare OLD.json NEW.json [options]\n\n"
         "Says what a change of a path fixed, brought or left, from two reports of pathvet check --json.\n"
         "Findings are matched by waypoints, code and joint, also where waypoints were put in or taken out.\n"
         "Exit status: 0 nothing is new or worse, 1 something is, 2 the call or an input file is wrong, 3 "
         "not "
         "done.\n\n"
         "Example:\n"
         "  pathvet compare before.json after.json\n\n"
      << compare_options();
  return text.str();
}

Setup<CompareSettings> setup_compare(const Arguments& arguments) {
  OptionValues values(arguments, compare_options());
  Setup<CompareSettings> setup;
  CompareSettings& settings = setup.settings;
  setup.wants_help = values.has("help");
  settings.quiet = values.has("quiet");
  settings.json = read_output(values, "json");
  if (values.positional().size() == 2) {
    settings.before = values.positional()[0];
    settings.after = values.positional()[1];
  } else {
    values.problem("compare takes two reports: the older and the newer one");
  }
  setup.problems = values.problems();
  return setup;
}

std::vector<std::string> file_problems(const CompareSettings& settings) {
  if (settings.before.empty() && settings.after.empty()) return {};
  const std::vector<std::string> inputs{settings.before, settings.after};
  std::vector<std::string> problems = output_problems(settings.outputs(), inputs);
  const std::vector<std::string> unreadable = input_problems(inputs);
  problems.insert(problems.end(), unreadable.begin(), unreadable.end());
  return problems;
}

int run_compare(const CompareSettings& settings) {
  const Reading<SavedReport> before = read_report(settings.before);
  const Reading<SavedReport> after = read_report(settings.after);
  std::vector<Fault> faults = before.faults;
  if (settings.after != settings.before) {
    faults.insert(faults.end(), after.faults.begin(), after.faults.end());
  }
  if (!faults.empty()) throw InputError(std::move(faults));
  const Comparison comparison = compare_reports(*before.value, *after.value);
  if (settings.json) {
    Output json(settings.json->target);
    write_comparison_json(comparison, json.stream());
    json.finish();
    json.commit();
  }
  if (settings.wants_text()) {
    Output text("-");
    write_comparison_text(comparison, text.stream(), style_of_standard_output());
    text.finish();
  }
  return comparison.has_worsened() ? 1 : 0;
}

}  // namespace pathvet::commands
