#include <fmt/format.h>

#include <algorithm>

#include "xml/characters.hpp"
#include "xml/document.hpp"

namespace pathvet::xml {
namespace {

bool is_text(pugi::xml_node node) {
  return node.type() == pugi::node_pcdata || node.type() == pugi::node_cdata;
}

std::size_t first_word(std::string_view text) {
  std::size_t at = 0;
  while (at < text.size() && is_space(text[at])) ++at;
  return at;
}

bool contains(Element::Names names, std::string_view name) {
  return std::find(names.begin(), names.end(), name) != names.end();
}

std::string expected(Element::Names names) {
  return names.size() == 0 ? "expected none" : "expected " + one_of({names.begin(), names.end()});
}

}  // namespace

void Element::fault(std::string what) const {
  document_->faults().add(offset(), std::move(what));
}

void Element::fault_at(const char* attribute, std::string what) const {
  document_->faults().add(attribute_offset(attribute), std::move(what));
}

void Element::fault_at_text(std::string what) const {
  for (const pugi::xml_node node : node_.children()) {
    const std::string_view value = node.value();
    if (!is_text(node) || first_word(value) == value.size()) continue;
    // White space is counted in the source: the parser has made one character of each CR LF in the value.
    const auto begin = static_cast<std::size_t>(node.offset_debug());
    document_->faults().add(begin + first_word(document_->text().substr(begin)), std::move(what));
    return;
  }
  fault(std::move(what));
}

/// Where the name of an attribute stands in the text. The parser doesn't keep that, so the tag is read once
/// more; it is known to be well-formed.
std::size_t Element::attribute_offset(std::string_view attribute) const {
  const std::string_view text = document_->text();
  std::size_t at = offset() + 1 + name().size();
  for (;;) {
    while (is_space(text[at])) ++at;
    if (text[at] == '>' || text[at] == '/') return offset();
    const std::size_t begin = at;
    while (!is_space(text[at]) && text[at] != '=') ++at;
    if (text.substr(begin, at - begin) == attribute) return begin;
    at = text.find_first_of("\"'", at);
    at = text.find(text[at], at + 1) + 1;
  }
}

void Element::expect(Names attributes, Names children, Text text) const {
  for (const pugi::xml_attribute attribute : node_.attributes()) {
    if (contains(attributes, attribute.name())) continue;
    fault_at(attribute.name(), fmt::format("unknown attribute {} of <{}>; {}", in_quotes(attribute.name()),
                                           name(), expected(attributes)));
  }
  bool stray_text = false;
  for (const pugi::xml_node node : node_.children()) {
    if (is_text(node)) {
      stray_text = stray_text || first_word(node.value()) < std::string_view(node.value()).size();
    } else if (!contains(children, node.name())) {
      Element(node, *document_)
          .fault(fmt::format("unknown element <{}> in <{}>; {}", node.name(), name(), expected(children)));
    }
  }
  if (stray_text && text == Text::none)
    fault_at_text(fmt::format("text in <{}>, where none belongs", name()));
}

std::optional<std::string_view> Element::find(const char* attribute) const {
  const pugi::xml_attribute found = node_.attribute(attribute);
  if (!found) return std::nullopt;
  return found.value();
}

std::optional<std::string_view> Element::require(const char* attribute) const {
  const std::optional<std::string_view> value = find(attribute);
  if (!value) fault(fmt::format("<{}> has no attribute \"{}\"", name(), attribute));
  return value;
}

std::string Element::require_name(const char* attribute) const {
  const std::optional<std::string_view> value = require(attribute);
  if (!value) return {};
  const auto is_control = [](char c) { return static_cast<unsigned char>(c) < 0x20; };
  if (first_word(*value) == value->size() || std::any_of(value->begin(), value->end(), is_control)) {
    fault_at(attribute, fmt::format("{} of <{}> is {}; expected a name, on one line and not empty", attribute,
                                    name(), in_quotes(*value)));
    return {};
  }
  return std::string(*value);
}

std::optional<double> Element::number(const char* attribute, Range range) const {
  const std::optional<std::string_view> value = find(attribute);
  if (!value) return std::nullopt;
  const Numbers parsed = parse_number(*value, range);
  if (parsed.problem.empty()) return parsed.values[0];
  fault_at(attribute, fmt::format("{} of <{}>: {}", attribute, name(), parsed.problem));
  return std::nullopt;
}

std::optional<double> Element::require_number(const char* attribute, Range range) const {
  return require(attribute) ? number(attribute, range) : std::nullopt;
}

std::optional<std::vector<double>> Element::numbers(const char* attribute, std::size_t count) const {
  const std::optional<std::string_view> value = find(attribute);
  if (!value) return std::nullopt;
  Numbers parsed = parse_numbers(*value);
  if (parsed.problem.empty() && parsed.values.size() != count) {
    parsed.problem = fmt::format("{}; expected {}", counted(parsed.values.size(), "number"), count);
  }
  if (parsed.problem.empty()) return std::move(parsed.values);
  fault_at(attribute, fmt::format("{} of <{}>: {}", attribute, name(), parsed.problem));
  return std::nullopt;
}

std::optional<std::vector<double>> Element::text_numbers() const {
  Numbers parsed = parse_numbers(text());
  if (parsed.problem.empty()) return std::move(parsed.values);
  fault_at_text(fmt::format("<{}>: {}", name(), parsed.problem));
  return std::nullopt;
}

std::string Element::text() const {
  std::string joined;
  for (const pugi::xml_node node : node_.children()) {
    if (is_text(node)) joined += node.value();
  }
  return joined;
}

std::vector<Element> Element::children(const char* name) const {
  std::vector<Element> found;
  for (const pugi::xml_node node : node_.children(name)) found.emplace_back(node, *document_);
  return found;
}

std::optional<Element> Element::child(const char* name) const {
  const pugi::xml_node first = node_.child(name);
  if (!first) return std::nullopt;
  for (pugi::xml_node node = first.next_sibling(name); node; node = node.next_sibling(name)) {
    Element(node, *document_).fault(fmt::format("a second <{}> in <{}>; expected one", name, this->name()));
  }
  return Element(first, *document_);
}

}  // namespace pathvet::xml
