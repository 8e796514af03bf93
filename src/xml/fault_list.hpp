#pragma once

#include <cstddef>
#include <string>
#include <string_view>
#include <vector>

#include "pathvet/xml/faults.hpp"

namespace pathvet::xml {

/// A file's report holds at most this many faults, and then one more that says how many there are.
inline constexpr std::size_t max_reported_faults = 100;

/// Line and column (in code points) of byte offsets. A line ends at LF, CR LF or a lone CR, as XML has it.
class PlaceFinder {
 public:
  explicit PlaceFinder(std::string_view text) : text_(text) {}
  /// Linear in the way from the offset asked for before, so ask in growing order. `offset` may be the text's
  /// size.
  [[nodiscard]] SourcePlace at(std::size_t offset);

 private:
  std::string_view text_;
  std::size_t offset_ = 0;
  SourcePlace place_{1, 1};
};

/// The faults of one text, at byte offsets. However many are added, memory stays bounded: all are counted,
/// and those that stand first in the text are kept.
class FaultList {
 public:
  void add(std::size_t offset, std::string what);
  [[nodiscard]] std::size_t count() const { return count_; }
  /// The faults in the order of their places (those of one place as they were added).
  [[nodiscard]] std::vector<Fault> in_order(const std::string& file, std::string_view text) const;

 private:
  struct Item {
    std::size_t offset;
    std::size_t order;
    std::string what;
  };
  static bool comes_before(const Item& one, const Item& other);
  void drop_last_ones();

  std::vector<Item> items_;
  std::size_t count_ = 0;
};

/// A longer text of a file is cut short in a message (bytes).
inline constexpr std::size_t longest_quote = 60;

/// Text of a file in double quotes, as a message shows it: cut short, and with control characters made
/// visible.
[[nodiscard]] std::string in_quotes(std::string_view text, std::size_t longest = longest_quote);

/// `1 number`, `2 numbers`
[[nodiscard]] std::string counted(std::size_t count, std::string_view noun);

/// `a, b or c`
[[nodiscard]] std::string one_of(const std::vector<std::string_view>& names);

}  // namespace pathvet::xml
