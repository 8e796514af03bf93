#include "xml/wellformed.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <array>
#include <vector>

#include "xml/characters.hpp"
#include "xml/declaration.hpp"
#include "xml/fault_list.hpp"

namespace pathvet::xml {
namespace {

constexpr std::array<std::string_view, 5> known_entities{"lt", "gt", "amp", "apos", "quot"};

/// Walks over the text once. Each step returns false after it has put down the fault that ends the walk.
class Scanner {
 public:
  explicit Scanner(std::string_view text) : text_(text) {}

  std::optional<TextFault> run() {
    const bool fine = declaration() && before_root() && root() && after_root();
    return fine ? std::nullopt : std::optional(fault_);
  }

 private:
  bool fail(std::size_t offset, std::string what) {
    fault_ = {offset, std::move(what)};
    return false;
  }
  [[nodiscard]] bool at_end() const { return at_ >= text_.size(); }
  [[nodiscard]] bool sees(std::string_view what) const { return text_.substr(at_).starts_with(what); }
  bool skip_space() {
    const std::size_t begin = at_;
    while (!at_end() && is_space(text_[at_])) ++at_;
    return at_ > begin;
  }
  std::string_view take_name() {
    const std::size_t begin = at_;
    while (!at_end()) {
      const CodePoint c = decode(text_, at_);
      if (at_ == begin ? !is_name_start(c.value) : !is_name_character(c.value)) break;
      at_ += c.size;
    }
    return text_.substr(begin, at_ - begin);
  }
  /// Goes behind the next `mark`; false where there is none.
  bool go_behind(std::string_view mark) {
    const std::size_t found = text_.find(mark, at_);
    if (found == std::string_view::npos) return false;
    at_ = found + mark.size();
    return true;
  }

  bool declaration();
  bool misc(bool& found);
  bool before_root();
  bool root();
  bool after_root();
  bool content();
  bool markup();
  bool start_tag();
  bool end_tag();
  bool attribute(std::string_view element);
  bool attribute_value(std::string_view name);
  bool reference();
  bool character_reference(std::size_t begin);
  bool comment();
  bool instruction();

  struct OpenTag {
    std::string_view name;
    std::size_t offset;
  };
  std::string_view text_;
  std::size_t at_ = 0;
  std::vector<OpenTag> open_;
  std::vector<std::string_view> names_;  // attributes of the tag at hand
  TextFault fault_;
};

bool Scanner::declaration() {
  const std::optional<TextFault> fault = skip_declaration(text_, at_);
  return !fault || fail(fault->offset, fault->what);
}

/// A comment, a processing instruction or white space, as they may stand around the root element.
bool Scanner::misc(bool& found) {
  found = true;
  if (skip_space()) return true;
  if (sees("<!--")) return comment();
  if (sees("<?")) return instruction();
  if (sees("<!DOCTYPE")) return fail(at_, "a DOCTYPE is not allowed");
  found = false;
  return true;
}

bool Scanner::before_root() {
  for (bool found = true; found;) {
    if (!misc(found)) return false;
  }
  if (at_end()) return fail(at_, "the file has no root element");
  if (!sees("<")) return fail(at_, "text before the root element");
  return true;
}

bool Scanner::root() {
  return start_tag() && content();
}

bool Scanner::after_root() {
  for (bool found = true; found;) {
    if (!misc(found)) return false;
  }
  if (at_end()) return true;
  if (sees("</")) return fail(at_, "an end tag after the root element's end");
  if (sees("<") && !sees("<!")) return fail(at_, "a second root element; expected the end of the file");
  return fail(at_, "text after the root element; expected the end of the file");
}

bool Scanner::content() {
  while (!open_.empty()) {
    if (at_end()) {
      return fail(open_.back().offset,
                  fmt::format("<{}> is not closed; expected </{}>", open_.back().name, open_.back().name));
    }
    const char c = text_[at_];
    if (c == '<') {
      if (!markup()) return false;
    } else if (c == '&') {
      if (!reference()) return false;
    } else if (c == ']' && sees("]]>")) {
      return fail(at_, "\"]]>\" in text; expected \"]]&gt;\"");
    } else {
      ++at_;
    }
  }
  return true;
}

bool Scanner::markup() {
  if (sees("</")) return end_tag();
  if (sees("<?")) return instruction();
  if (sees("<!--")) return comment();
  if (sees("<![CDATA[")) {
    const std::size_t begin = at_;
    return go_behind("]]>") || fail(begin, "the CDATA section is not closed; expected \"]]>\"");
  }
  if (sees("<!DOCTYPE")) return fail(at_, "a DOCTYPE is not allowed");
  return start_tag();
}

bool Scanner::start_tag() {
  const std::size_t begin = at_++;
  const std::string_view name = take_name();
  if (name.empty()) return fail(begin, "\"<\" begins no tag here; expected an element's name (or \"&lt;\")");
  names_.clear();
  for (;;) {
    const bool space = skip_space();
    if (at_end()) return fail(begin, fmt::format("the tag <{}> is not closed; expected \">\"", name));
    if (sees("/>")) {
      at_ += 2;
      return true;
    }
    if (sees(">")) break;
    if (!space) {
      return fail(at_, fmt::format("expected white space, \">\" or \"/>\" in the tag <{}>", name));
    }
    if (!attribute(name)) return false;
  }
  ++at_;
  if (open_.size() == max_depth) {
    return fail(begin, fmt::format("elements are nested more than {} deep", max_depth));
  }
  open_.push_back({name, begin});
  return true;
}

bool Scanner::end_tag() {
  const std::size_t begin = at_;
  at_ += 2;
  const std::string_view name = take_name();
  if (name != open_.back().name) {
    return fail(begin, fmt::format("</{}> where </{}> was expected (opened at line {})", name,
                                   open_.back().name, PlaceFinder(text_).at(open_.back().offset).line));
  }
  skip_space();
  if (!sees(">")) return fail(at_, fmt::format("the end tag </{}> is not closed; expected \">\"", name));
  ++at_;
  open_.pop_back();
  return true;
}

bool Scanner::attribute(std::string_view element) {
  const std::size_t begin = at_;
  const std::string_view name = take_name();
  if (name.empty()) return fail(begin, fmt::format("expected an attribute's name in the tag <{}>", element));
  if (std::find(names_.begin(), names_.end(), name) != names_.end()) {
    return fail(begin, fmt::format("the attribute \"{}\" stands twice in <{}>", name, element));
  }
  if (names_.size() == max_attributes) {
    return fail(begin, fmt::format("<{}> has more than {} attributes", element, max_attributes));
  }
  names_.push_back(name);
  skip_space();
  if (!sees("=")) return fail(at_, fmt::format("expected \"=\" after the attribute's name \"{}\"", name));
  ++at_;
  skip_space();
  return attribute_value(name);
}

bool Scanner::attribute_value(std::string_view name) {
  const std::size_t begin = at_;
  if (!sees("\"") && !sees("'")) {
    return fail(begin, fmt::format("the value of the attribute \"{}\" is not in quotes", name));
  }
  const char quote = text_[at_++];
  while (!at_end()) {
    const char c = text_[at_];
    if (c == quote) {
      ++at_;
      return true;
    }
    if (c == '<') {
      return fail(at_,
                  fmt::format("\"<\" in the value of the attribute \"{}\"; expected \"&lt;\" (or the closing "
                              "quote before it)",
                              name));
    }
    if (c != '&') {
      ++at_;
    } else if (!reference()) {
      return false;
    }
  }
  return fail(begin, fmt::format("the value of the attribute \"{}\" has no closing quote", name));
}

bool Scanner::reference() {
  const std::size_t begin = at_++;
  if (sees("#")) return character_reference(begin);
  const std::string_view name = take_name();
  if (name.empty() || !sees(";")) {
    return fail(begin, "\"&\" begins no reference here; expected \"&amp;\"");
  }
  ++at_;
  if (std::find(known_entities.begin(), known_entities.end(), name) == known_entities.end()) {
    return fail(begin, fmt::format("unknown entity \"&{};\"; expected lt, gt, amp, apos or quot", name));
  }
  return true;
}

bool Scanner::character_reference(std::size_t begin) {
  ++at_;
  const bool hexadecimal = sees("x");
  if (hexadecimal) ++at_;
  const std::string_view digits = hexadecimal ? "0123456789abcdefABCDEF" : "0123456789";
  const std::size_t end = std::min(text_.find_first_not_of(digits, at_), text_.size());
  if (end == at_ || end == text_.size() || text_[end] != ';') {
    return fail(begin, "a broken character reference; expected for instance \"&#176;\" or \"&#xB0;\"");
  }
  char32_t value = 0;
  for (; at_ < end && value <= 0x10FFFF; ++at_) {
    const char32_t digit = static_cast<unsigned char>(text_[at_]);
    value = value * (hexadecimal ? 16 : 10) + (digit <= '9' ? digit - '0' : (digit | 0x20) - 'a' + 10);
  }
  at_ = end + 1;
  if (!is_xml_character(value)) {
    return fail(begin, "a reference to a character that XML does not allow");
  }
  return true;
}

bool Scanner::comment() {
  const std::size_t begin = at_;
  at_ += 4;
  if (!go_behind("--")) return fail(begin, "the comment is not closed; expected \"-->\"");
  if (!sees(">")) return fail(at_ - 2, "\"--\" inside a comment");
  ++at_;
  return true;
}

bool Scanner::instruction() {
  const std::size_t begin = at_;
  at_ += 2;
  const std::string_view target = take_name();
  if (target.empty()) return fail(begin, "a processing instruction without a name");
  if (lowered(target) == "xml") {
    return fail(begin, "the XML declaration must stand at the very beginning of the file");
  }
  if (!sees("?>") && !skip_space())
    return fail(at_, "expected \"?>\" or white space in the processing instruction");
  return go_behind("?>") || fail(begin, "the processing instruction is not closed; expected \"?>\"");
}

}  // namespace

std::optional<TextFault> find_ill_formed(std::string_view text) {
  return Scanner(text).run();
}

}  // namespace pathvet::xml
