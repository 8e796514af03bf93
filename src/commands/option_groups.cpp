#include "commands/option_groups.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <boost/program_options/value_semantic.hpp>

#include "pathvet/model/units.hpp"

namespace pathvet::commands {
namespace {

namespace po = boost::program_options;

/// Every value is taken as text and read by OptionValues, which needs no locale and collects problems.
po::typed_value<std::string>* value(const char* shown) {
  return po::value<std::string>()->value_name(shown);
}

void read_into(double& field, OptionValues& values, const char* name, double unit) {
  if (const auto number = values.number(name)) field = *number * unit;
}

}  // namespace

po::options_description common_options() {
  po::options_description group("Common options");
  group.add_options()  //
      ("log-level", value("LEVEL"),
       "how much to log on standard error: trace, debug, info, warn (default), error, off")  //
      ("help", "show this help and leave");
  return group;
}

spdlog::level::level_enum read_log_level(OptionValues& values) {
  const std::string name = values.text("log-level").value_or("warn");
  constexpr std::array<const char*, 6> names = {"trace", "debug", "info", "warn", "error", "off"};
  if (std::ranges::find(names, name) == names.end()) {
    values.problem(fmt::format("--log-level must be one of {}, not '{}'", fmt::join(names, ", "), name));
    return spdlog::level::warn;
  }
  return spdlog::level::from_str(name);
}

po::options_description tolerance_options() {
  po::options_description group("What is flagged, and how finely it is looked for");
  group.add_options()  //
      ("limit-margin", value("DEG"),
       "warn where a turning joint comes nearer to a limit than this (default 3)")   //
      ("limit-margin-mm", value("MM"), "the same for a sliding joint (default 10)")  //
      ("speed-margin", value("PERCENT"),
       "warn where a joint needs more than this of its speed (default 85; a value below 1 is read as a "
       "share)")  //
      ("singular-below", value("VALUE"),
       "warn where the smallest singular value of the scaled Jacobian falls below this (default 0.02)")  //
      ("reduced-speed", value("MM_PER_S"),
       "flag where the TCP or a joint's centre moves faster than this")               //
      ("step-mm", value("MM"), "samples are at most this far apart (default 1)")      //
      ("step-deg", value("DEG"), "samples are turned by at most this (default 0.5)")  //
      ("threads", value("N"), "work with N threads (default 1); the result does not depend on it");
  return group;
}

CheckOptions read_check_options(OptionValues& values) {
  CheckOptions options;
  read_into(options.step_length, values, "step-mm", 1);
  read_into(options.step_angle, values, "step-deg", radians_per_degree);
  read_into(options.limit_margin_angle, values, "limit-margin", radians_per_degree);
  read_into(options.limit_margin_length, values, "limit-margin-mm", 1);
  read_into(options.singular_below, values, "singular-below", 1);
  if (const auto margin = values.number("speed-margin")) {
    options.speed_margin = *margin < 1 ? *margin : *margin / 100;
  }
  options.reduced_speed = values.number("reduced-speed");
  if (const auto threads = values.whole_number("threads")) options.threads = *threads;
  for (std::string& problem : options.problems()) values.problem(std::move(problem));
  return options;
}

std::optional<OutputRequest> read_output(OptionValues& values, const std::string& name) {
  const auto target = values.text(name);
  if (!target) return {};
  if (target->empty()) {
    values.problem(fmt::format("--{} needs the name of a file, or - for standard output", name));
    return {};
  }
  return OutputRequest{"--" + name, *target};
}

void check_standard_output(OptionValues& values, const std::vector<OutputRequest>& outputs) {
  std::vector<std::string> users;
  for (const OutputRequest& output : outputs) {
    if (output.target == "-") users.push_back(output.option);
  }
  if (users.size() > 1) {
    values.problem(
        fmt::format("only one output can go to standard output, not {}", fmt::join(users, " and ")));
  }
}

}  // namespace pathvet::commands
