#include "xml/numbers.hpp"

#include <fmt/format.h>

#include <charconv>
#include <cmath>

#include "xml/characters.hpp"
#include "xml/fault_list.hpp"

namespace pathvet::xml {
namespace {

std::string_view take_word(std::string_view& text) {
  std::size_t begin = 0;
  while (begin < text.size() && is_space(text[begin])) ++begin;
  std::size_t end = begin;
  while (end < text.size() && !is_space(text[end])) ++end;
  const std::string_view word = text.substr(begin, end - begin);
  text.remove_prefix(end);
  return word;
}

/// The number that `word` spells; otherwise `problem` is set.
double number_of(std::string_view word, std::string& problem) {
  std::string_view digits = word;
  if (digits.size() > 1 && digits[0] == '+' && digits[1] != '-') digits.remove_prefix(1);
  double value = 0;
  const auto [end, error] = std::from_chars(digits.data(), digits.data() + digits.size(), value);
  if (error == std::errc::invalid_argument || end != digits.data() + digits.size()) {
    problem = fmt::format("{} is not a number", in_quotes(word));
  } else if (!std::isfinite(value)) {
    problem = fmt::format("{} is not a finite number", in_quotes(word));
  } else if (error == std::errc::result_out_of_range) {
    problem = fmt::format("{} is out of the range of double precision", in_quotes(word));
  } else if (std::abs(value) > greatest_number) {
    problem = fmt::format("{} is out of range; expected a number of at most {:g} in size", in_quotes(word),
                          greatest_number);
  }
  return value;
}

}  // namespace

Numbers parse_numbers(std::string_view text) {
  Numbers numbers;
  for (std::string_view word = take_word(text); !word.empty(); word = take_word(text)) {
    numbers.values.push_back(number_of(word, numbers.problem));
    if (!numbers.problem.empty()) break;
  }
  return numbers;
}

Numbers parse_number(std::string_view text, Range range) {
  Numbers numbers = parse_numbers(text);
  if (!numbers.problem.empty()) return numbers;
  if (numbers.values.size() != 1) {
    numbers.problem = fmt::format("{} is not one number", in_quotes(text));
  } else if (range == Range::positive && numbers.values[0] <= 0) {
    numbers.problem = fmt::format("{} is not above 0", in_quotes(text));
  } else if (range == Range::not_negative && numbers.values[0] < 0) {
    numbers.problem = fmt::format("{} is below 0", in_quotes(text));
  }
  return numbers;
}

}  // namespace pathvet::xml
