#include "xml/document.hpp"

#include <fmt/format.h>

#include <cerrno>
#include <cstdio>
#include <memory>
#include <new>
#include <system_error>

#include "xml/wellformed.hpp"

namespace pathvet::xml {
namespace {

constexpr std::string_view byte_order_mark = "\xEF\xBB\xBF";
constexpr std::size_t chunk_size = std::size_t{1} << 16;

std::string last_error() {
  return std::generic_category().message(errno);
}

}  // namespace

FileText load_file(const std::string& file) {
  const std::unique_ptr<std::FILE, int (*)(std::FILE*)> stream(std::fopen(file.c_str(), "rb"), std::fclose);
  if (!stream) return {{}, last_error()};
  std::string text;
  std::string chunk(chunk_size, '\0');
  while (const std::size_t count = std::fread(chunk.data(), 1, chunk.size(), stream.get())) {
    text.append(chunk, 0, count);
    if (text.size() > max_file_size) {
      return {{}, fmt::format("larger than {} MiB", max_file_size >> 20)};
    }
  }
  if (std::ferror(stream.get()) != 0) return {{}, last_error()};
  return {std::move(text), {}};
}

Document::Document(std::string text, std::string file) : text_(std::move(text)), file_(std::move(file)) {
  if (std::string_view(text_).starts_with(byte_order_mark)) text_.erase(0, byte_order_mark.size());
  std::optional<TextFault> fault = find_bad_character(text_);
  if (!fault) fault = find_ill_formed(text_);
  if (fault) {
    faults_.add(fault->offset, std::move(fault->what));
    return;
  }
  const pugi::xml_parse_result result =
      tree_.load_buffer(text_.data(), text_.size(), pugi::parse_default, pugi::encoding_utf8);
  if (result.status == pugi::status_out_of_memory) throw std::bad_alloc();
  if (!result) faults_.add(static_cast<std::size_t>(result.offset), result.description());
}

std::optional<Element> Document::root(std::string_view name) {
  if (faults_.count() > 0) return std::nullopt;
  const Element root(tree_.document_element(), *this);
  if (root.name() == name) return root;
  root.fault(fmt::format("the root element is <{}>; expected <{}>", root.name(), name));
  return std::nullopt;
}

}  // namespace pathvet::xml
