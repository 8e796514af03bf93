#include "xml/declaration.hpp"

#include <fmt/format.h>

#include "xml/characters.hpp"
#include "xml/fault_list.hpp"

namespace pathvet::xml {
namespace {

constexpr std::string_view opening = "<?xml";

struct PseudoAttribute {
  std::string_view value;
  std::size_t offset;  ///< of its name
};

std::size_t behind_space(std::string_view text, std::size_t at) {
  while (at < text.size() && is_space(text[at])) ++at;
  return at;
}

/// Takes ` name="value"`; `at` stays where it is if there is none, or a broken one.
std::optional<PseudoAttribute> take(std::string_view name, std::string_view text, std::size_t& at) {
  const std::size_t begin = behind_space(text, at);
  if (begin == at || !text.substr(begin).starts_with(name)) return std::nullopt;
  const std::size_t equals = behind_space(text, begin + name.size());
  if (equals == text.size() || text[equals] != '=') return std::nullopt;
  const std::size_t quote = behind_space(text, equals + 1);
  if (quote == text.size() || (text[quote] != '"' && text[quote] != '\'')) return std::nullopt;
  const std::size_t end = text.find(text[quote], quote + 1);
  if (end == std::string_view::npos) return std::nullopt;
  at = end + 1;
  return PseudoAttribute{text.substr(quote + 1, end - quote - 1), begin};
}

/// Production [26]: `1.` and digits.
bool is_version(std::string_view version) {
  return version.size() > 2 && version.starts_with("1.") &&
         version.find_first_not_of("0123456789", 2) == std::string_view::npos;
}

}  // namespace

std::string lowered(std::string_view text) {
  std::string lower(text);
  for (char& c : lower) {
    if (c >= 'A' && c <= 'Z') c = static_cast<char>(c - 'A' + 'a');
  }
  return lower;
}

std::optional<TextFault> skip_declaration(std::string_view text, std::size_t& end) {
  std::size_t at = opening.size();
  if (!text.starts_with(opening) || at == text.size() || !is_space(text[at])) return std::nullopt;
  const auto version = take("version", text, at);
  if (!version) {
    return TextFault{0, "the XML declaration has no version; expected <?xml version=\"1.0\"?>"};
  }
  if (!is_version(version->value)) {
    return TextFault{version->offset,
                     fmt::format("XML version {}; expected \"1.0\"", in_quotes(version->value))};
  }
  const auto encoding = take("encoding", text, at);
  if (encoding && lowered(encoding->value) != "utf-8") {
    return TextFault{encoding->offset,
                     fmt::format("encoding {}; expected \"UTF-8\"", in_quotes(encoding->value))};
  }
  const auto standalone = take("standalone", text, at);
  if (standalone && standalone->value != "yes" && standalone->value != "no") {
    return TextFault{standalone->offset,
                     fmt::format("standalone={}; expected \"yes\" or \"no\"", in_quotes(standalone->value))};
  }
  at = behind_space(text, at);
  if (!text.substr(at).starts_with("?>")) {
    return TextFault{
        at, "the XML declaration is broken here; expected <?xml version=\"1.0\" encoding=\"UTF-8\"?>"};
  }
  end = at + 2;
  return std::nullopt;
}

}  // namespace pathvet::xml
