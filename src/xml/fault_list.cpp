#include "xml/fault_list.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <tuple>

#include "xml/characters.hpp"

namespace pathvet {

std::string to_string(const Fault& fault) {
  return fmt::format("{}:{}:{}: error: {}", fault.file, fault.place.line, fault.place.column, fault.what);
}

}  // namespace pathvet

namespace pathvet::xml {
namespace {

bool is_continuation(char c) {
  return (static_cast<unsigned char>(c) & 0xC0) == 0x80;
}

bool is_control(char32_t c) {
  return c < 0x20 || (c >= 0x7F && c <= 0x9F);
}

}  // namespace

SourcePlace PlaceFinder::at(std::size_t offset) {
  if (offset < offset_) {
    offset_ = 0;
    place_ = {1, 1};
  }
  for (; offset_ < offset; ++offset_) {
    const char c = text_[offset_];
    const bool carriage_return_alone =
        c == '\r' && (offset_ + 1 == text_.size() || text_[offset_ + 1] != '\n');
    if (c == '\n' || carriage_return_alone) {
      ++place_.line;
      place_.column = 1;
    } else if (!is_continuation(c)) {
      ++place_.column;
    }
  }
  return place_;
}

bool FaultList::comes_before(const Item& one, const Item& other) {
  return std::tie(one.offset, one.order) < std::tie(other.offset, other.order);
}

void FaultList::add(std::size_t offset, std::string what) {
  items_.push_back({offset, count_++, std::move(what)});
  if (items_.size() >= 4 * max_reported_faults) drop_last_ones();
}

void FaultList::drop_last_ones() {
  // One more than is reported stays: the closing fault stands at its place.
  const auto end = items_.begin() + max_reported_faults + 1;
  std::nth_element(items_.begin(), end, items_.end(), comes_before);
  items_.erase(end, items_.end());
}

std::vector<Fault> FaultList::in_order(const std::string& file, std::string_view text) const {
  std::vector<Item> items = items_;
  std::sort(items.begin(), items.end(), comes_before);
  PlaceFinder finder(text);
  std::vector<Fault> faults;
  for (const Item& item : items) {
    const SourcePlace place = finder.at(item.offset);
    if (faults.size() < max_reported_faults) {
      faults.push_back({file, place, item.what});
      continue;
    }
    faults.push_back({file, place,
                      fmt::format("and {} more from here on; the file has {} in all",
                                  count_ - max_reported_faults, counted(count_, "fault"))});
    break;
  }
  return faults;
}

std::string in_quotes(std::string_view text, std::size_t longest) {
  std::string shown = "\"";
  for (std::size_t offset = 0; offset < text.size();) {
    if (offset >= longest) {
      shown += "…";
      break;
    }
    const CodePoint c = decode(text, offset);
    const std::size_t size = std::max<std::size_t>(c.size, 1);
    if (c.size == 0 || is_control(c.value)) {
      shown += fmt::format("\\x{:02x}", c.size == 0 ? static_cast<unsigned char>(text[offset])
                                                    : static_cast<unsigned>(c.value));
    } else {
      shown += text.substr(offset, size);
    }
    offset += size;
  }
  return shown + '"';
}

std::string counted(std::size_t count, std::string_view noun) {
  return fmt::format("{} {}{}", count, noun, count == 1 ? "" : "s");
}

std::string one_of(const std::vector<std::string_view>& names) {
  std::string list;
  for (std::size_t i = 0; i < names.size(); ++i) {
    if (i > 0) list += i + 1 == names.size() ? " or " : ", ";
    list += names[i];
  }
  return list;
}

}  // namespace pathvet::xml
