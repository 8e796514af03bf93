#include "xml/names.hpp"

#include <fmt/format.h>

namespace pathvet::xml {
namespace {

constexpr std::size_t longest_list = 12;  // names shown in one message

}  // namespace

void check_version(const Element& root) {
  const auto version = root.require("version");
  if (!version || *version == known_version) return;
  root.fault_at("version", fmt::format("version {} of <{}>; expected \"{}\"", in_quotes(*version),
                                       root.name(), known_version));
}

void UniqueNames::check(const Element& element, std::string_view kind, const char* attribute) {
  const auto name = element.find(attribute);
  if (!name || taken_.insert(*name).second) return;
  element.fault_at(attribute,
                   fmt::format("the {} {} is taken by another {}", attribute, in_quotes(*name), kind));
}

std::string expected_one_of(const std::vector<std::string_view>& names) {
  if (names.empty()) return "the cell has none";
  std::vector<std::string> shown;
  for (const std::string_view name : names) {
    if (shown.size() == longest_list) {
      shown.push_back("…");
      break;
    }
    shown.push_back(in_quotes(name));
  }
  return "expected " + one_of({shown.begin(), shown.end()});
}

}  // namespace pathvet::xml
