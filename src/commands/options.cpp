#include "commands/options.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <boost/program_options/errors.hpp>
#include <boost/program_options/parsers.hpp>
#include <charconv>
#include <cmath>
#include <string_view>

namespace pathvet::commands {
namespace {

namespace po = boost::program_options;

constexpr int parse_style = po::command_line_style::allow_long | po::command_line_style::long_allow_adjacent |
                            po::command_line_style::long_allow_next;

std::optional<double> to_number(std::string_view word) {
  if (word.size() > 1 && word[0] == '+' && word[1] != '-') word.remove_prefix(1);
  double value = 0;
  const auto [end, error] = std::from_chars(word.data(), word.data() + word.size(), value);
  if (error != std::errc() || end != word.data() + word.size() || !std::isfinite(value)) return {};
  return value;
}

std::vector<std::string_view> words_of(std::string_view text) {
  constexpr std::string_view separators = " ,\t\n";
  std::vector<std::string_view> words;
  while (true) {
    const std::size_t begin = text.find_first_not_of(separators);
    if (begin == std::string_view::npos) return words;
    text.remove_prefix(begin);
    const std::size_t end = std::min(text.find_first_of(separators), text.size());
    words.push_back(text.substr(0, end));
    text.remove_prefix(end);
  }
}

std::string bare(std::string name) {
  return name.substr(std::min(name.find_first_not_of('-'), name.size()));
}

bool is_option(const std::string& word) {
  return word.rfind("--", 0) == 0;
}

/// Whether `word` is "--name" of an option that takes a value.
bool wants_value(const std::string& word, const po::options_description& known) {
  if (!is_option(word)) return false;
  const po::option_description* option = known.find_nothrow(bare(word), false);
  return option && option->semantic()->max_tokens() > 0;
}

}  // namespace

OptionValues::OptionValues(const Arguments& arguments, const po::options_description& known) {
  const auto terminator = std::ranges::find(arguments, "--");
  Arguments words(arguments.begin(), terminator);
  drop_misused(words, known);
  parse(words, known);
  if (terminator != arguments.end()) positional_.insert(positional_.end(), terminator + 1, arguments.end());
}

/// The parser throws at the first option that lacks a value, and takes a following option for one; so these
/// are told and taken out before it runs. Only after '=' may a value begin with "--".
void OptionValues::drop_misused(Arguments& words, const po::options_description& known) {
  Arguments kept;
  for (std::size_t i = 0; i < words.size(); ++i) {
    std::string word = words[i];
    const std::string name = word.substr(0, word.find('='));
    if (name == "--") {
      problem(fmt::format("unknown option {}", word));
      continue;
    }
    const bool is_known = is_option(name) && known.find_nothrow(bare(name), false);
    if (is_known && wants_value(name, known)) {
      const bool has_next = i + 1 < words.size() && !is_option(words[i + 1]);
      if (word == name && has_next) word += '=' + words[++i];
      if (word.size() <= name.size() + 1) {
        problem(fmt::format("{} needs a value", name));
        continue;
      }
    } else if (is_known && word != name) {
      problem(fmt::format("{} takes no value", name));
      continue;
    }
    kept.push_back(std::move(word));
  }
  words = std::move(kept);
}

void OptionValues::parse(const Arguments& words, const po::options_description& known) {
  std::vector<po::option> options;
  try {
    options =
        po::command_line_parser(words).options(known).style(parse_style).allow_unregistered().run().options;
  } catch (const po::error& error) {
    problem(error.what());
  }
  for (const po::option& option : options) {
    if (option.unregistered) {
      problem(fmt::format("unknown option {}", option.original_tokens.at(0)));
    } else if (option.position_key < 0) {
      take(option.string_key, option.value);
    } else if (const std::string& word = option.value.at(0); word.size() > 1 && word[0] == '-') {
      problem(fmt::format("unknown option {}", word));
    } else {
      positional_.push_back(word);
    }
  }
}

void OptionValues::take(const std::string& name, const std::vector<std::string>& values) {
  const std::string value = values.empty() ? "" : values[0];
  if (!given_.emplace(name, value).second) problem(fmt::format("--{} is given more than once", name));
}

std::optional<std::string> OptionValues::text(const std::string& name) const {
  const auto found = given_.find(name);
  if (found == given_.end()) return {};
  return found->second;
}

std::optional<double> OptionValues::number(const std::string& name) {
  const auto values = numbers(name, 1);
  if (!values) return {};
  return values->front();
}

std::optional<int> OptionValues::whole_number(const std::string& name) {
  const auto word = text(name);
  if (!word) return {};
  int value = 0;
  const auto [end, error] = std::from_chars(word->data(), word->data() + word->size(), value);
  if (error == std::errc() && end == word->data() + word->size()) return value;
  problem(fmt::format("--{} must be a whole number, not '{}'", name, *word));
  return {};
}

std::optional<std::vector<double>> OptionValues::numbers(const std::string& name, std::size_t count) {
  const auto given = text(name);
  if (!given) return {};
  std::vector<double> values;
  for (std::string_view word : words_of(*given)) {
    if (const auto value = to_number(word)) {
      values.push_back(*value);
    } else {
      problem(fmt::format("--{}: '{}' is not a number", name, word));
      return {};
    }
  }
  if (values.empty() || (count > 0 && values.size() != count)) {
    const std::string wanted = count == 0   ? "at least one number"
                               : count == 1 ? "one number"
                                            : fmt::format("{} numbers", count);
    problem(fmt::format("--{} must be {}, not '{}'", name, wanted, *given));
    return {};
  }
  return values;
}

}  // namespace pathvet::commands
