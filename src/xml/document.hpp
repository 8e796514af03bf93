#pragma once

#include <cstddef>
#include <initializer_list>
#include <optional>
#include <pugixml.hpp>
#include <span>
#include <string>
#include <string_view>
#include <vector>

#include "xml/fault_list.hpp"
#include "xml/numbers.hpp"

namespace pathvet::xml {

/// Files above this size are refused.
inline constexpr std::size_t max_file_size = std::size_t{512} << 20;  // bytes

struct FileText {
  std::optional<std::string> text;
  std::string problem;  ///< why there is no text
};

[[nodiscard]] FileText load_file(const std::string& file);

class Document;

/// An element of a document, with the ways to read it that put down faults at the right place. A view: the
/// document must outlive it and the strings that it hands out.
class Element {
 public:
  using Names = std::span<const std::string_view>;
  using NameList = std::initializer_list<std::string_view>;
  enum class Text { none, numbers };

  Element(pugi::xml_node node, Document& document) : node_(node), document_(&document) {}

  [[nodiscard]] std::string_view name() const { return node_.name(); }
  /// Of the tag's `<`.
  [[nodiscard]] std::size_t offset() const { return static_cast<std::size_t>(node_.offset_debug()) - 1; }

  void fault(std::string what) const;
  /// At the attribute's name (at the tag if it isn't there).
  void fault_at(const char* attribute, std::string what) const;
  /// At the first character of the text (at the tag if there is none).
  void fault_at_text(std::string what) const;

  /// Faults for every attribute and element that is not listed, and for text where none belongs.
  void expect(Names attributes, Names children, Text text = Text::none) const;
  void expect(NameList attributes, NameList children, Text text = Text::none) const {
    expect(Names(attributes.begin(), attributes.size()), Names(children.begin(), children.size()), text);
  }

  [[nodiscard]] bool has(const char* attribute) const { return !node_.attribute(attribute).empty(); }
  /// The attribute's value; nothing if it isn't there.
  [[nodiscard]] std::optional<std::string_view> find(const char* attribute) const;
  /// The same, and a fault if it isn't there.
  [[nodiscard]] std::optional<std::string_view> require(const char* attribute) const;
  /// A required attribute that names something: not empty, no control characters. Empty if it is faulty.
  [[nodiscard]] std::string require_name(const char* attribute) const;

  /// Nothing if the attribute isn't there or is faulty (then with a fault).
  [[nodiscard]] std::optional<double> number(const char* attribute, Range range = Range::any) const;
  [[nodiscard]] std::optional<double> require_number(const char* attribute, Range range = Range::any) const;
  /// `count` numbers in an attribute.
  [[nodiscard]] std::optional<std::vector<double>> numbers(const char* attribute, std::size_t count) const;
  /// All numbers in the element's text, of whatever count.
  [[nodiscard]] std::optional<std::vector<double>> text_numbers() const;
  [[nodiscard]] std::string text() const;

  [[nodiscard]] std::vector<Element> children(const char* name) const;
  /// The child of that name, if it is there; a second one is a fault.
  [[nodiscard]] std::optional<Element> child(const char* name) const;

 private:
  [[nodiscard]] std::size_t attribute_offset(std::string_view attribute) const;

  pugi::xml_node node_;
  Document* document_;
};

/// A text, its tree, and all faults found in it so far.
class Document {
 public:
  /// `text` with or without byte order mark. Faults of the XML itself are put down at once.
  Document(std::string text, std::string file);
  Document(const Document&) = delete;
  Document& operator=(const Document&) = delete;

  /// The root, if the XML is sound and the root has that name; otherwise there is a fault.
  [[nodiscard]] std::optional<Element> root(std::string_view name);

  [[nodiscard]] std::string_view text() const { return text_; }
  [[nodiscard]] const std::string& file() const { return file_; }
  [[nodiscard]] FaultList& faults() { return faults_; }
  [[nodiscard]] std::vector<Fault> faults_in_order() const { return faults_.in_order(file_, text_); }

 private:
  std::string text_;
  std::string file_;
  pugi::xml_document tree_;
  FaultList faults_;
};

}  // namespace pathvet::xml
