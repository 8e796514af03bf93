#include "commands/options.hpp"

#include <doctest/doctest.h>

#include <boost/program_options/value_semantic.hpp>

using namespace pathvet::commands;
namespace po = boost::program_options;

namespace {

po::options_description known() {
  po::options_description options("Options");
  options.add_options()("joints", po::value<std::string>(), "")("step", po::value<std::string>(), "")(
      "step-fine", po::value<std::string>(), "")("quiet", "");
  return options;
}

OptionValues parse(const Arguments& arguments) {
  return OptionValues(arguments, known());
}

std::vector<std::string> problems(const Arguments& arguments) {
  return parse(arguments).problems();
}

}  // namespace

TEST_CASE("options and files may stand in any order") {
  const OptionValues values = parse({"a.xml", "--step", "2", "b.xml", "--quiet", "--", "-c.xml"});
  CHECK(values.problems().empty());
  CHECK(values.positional() == std::vector<std::string>{"a.xml", "b.xml", "-c.xml"});
  CHECK(values.has("quiet"));
  CHECK(!values.has("joints"));
  CHECK(values.text("step") == "2");
}

TEST_CASE("a value may begin with a minus, beside the option or after '='") {
  using Numbers = std::vector<double>;
  OptionValues values = parse({"--joints", "-10 20,-.5 , +3e1", "--step=-7"});
  CHECK(values.numbers("joints", 4).value_or(Numbers()) == Numbers{-10, 20, -0.5, 30});
  CHECK(values.number("step") == -7);
  CHECK(values.problems().empty());
  OptionValues single = parse({"--joints", "-10"});
  CHECK(single.numbers("joints", 0).value_or(Numbers()) == Numbers{-10});
}

TEST_CASE("what is wrong with the words is told, all of it") {
  CHECK(problems({"--stp", "1"}) == std::vector<std::string>{"unknown option --stp"});
  CHECK(problems({"--ste", "1"}) == std::vector<std::string>{"unknown option --ste"});  // no guessing
  CHECK(problems({"-q"}) == std::vector<std::string>{"unknown option -q"});
  CHECK(problems({"--step"}) == std::vector<std::string>{"--step needs a value"});
  CHECK(problems({"--step", "--quiet"}) == std::vector<std::string>{"--step needs a value"});
  CHECK(problems({"--step", "--stp"}) ==
        std::vector<std::string>{"--step needs a value", "unknown option --stp"});
  CHECK(problems({"--step", ""}) == std::vector<std::string>{"--step needs a value"});
  CHECK(problems({"--=1"}).size() == 1);
  CHECK(problems({"--step="}) == std::vector<std::string>{"--step needs a value"});
  CHECK(problems({"--quiet=1"}) == std::vector<std::string>{"--quiet takes no value"});
  CHECK(problems({"--step", "1", "--step", "2"}) ==
        std::vector<std::string>{"--step is given more than once"});
  CHECK(problems({"--quiet=1", "--nope", "--step"}) ==
        std::vector<std::string>{"--quiet takes no value", "--step needs a value", "unknown option --nope"});
}

TEST_CASE("numbers that are none") {
  for (const char* word : {"abc", "1x", "nan", "inf", "1e999", "", "0x10", "+-1"}) {
    OptionValues values = parse({std::string("--step= ") + word});
    CAPTURE(word);
    CHECK(!values.number("step"));
    CHECK(values.problems().size() == 1);
  }
  OptionValues values = parse({"--step", "1 2", "--joints", "1.5"});
  CHECK(!values.number("step"));
  CHECK(!values.whole_number("joints"));
  CHECK(values.problems() == std::vector<std::string>{"--step must be one number, not '1 2'",
                                                      "--joints must be a whole number, not '1.5'"});
}
