#pragma once

#include <optional>
#include <string>
#include <string_view>
#include <unordered_set>
#include <vector>

#include "xml/document.hpp"

namespace pathvet::xml {

/// The version of both file formats that this reader knows.
inline constexpr std::string_view known_version = "1";
void check_version(const Element& root);

/// Keeps names of one kind apart. Holds views: what was checked or taken must outlive it.
class UniqueNames {
 public:
  explicit UniqueNames(std::size_t expected_count = 0) { taken_.reserve(expected_count); }
  void take(std::string_view name) { taken_.insert(name); }
  /// A fault at `attribute` if its value is taken already (one that is missing is a fault elsewhere).
  void check(const Element& element, std::string_view kind, const char* attribute = "name");

 private:
  std::unordered_set<std::string_view> taken_;
};

/// The index of the part with that name; nothing if there is none.
template <typename Part>
[[nodiscard]] std::optional<int> index_of(const std::vector<Part>& parts, std::string_view name) {
  for (std::size_t i = 0; i < parts.size(); ++i) {
    if (parts[i].name == name) return static_cast<int>(i);
  }
  return std::nullopt;
}

/// `expected A, B or C`, or that there is none.
[[nodiscard]] std::string expected_one_of(const std::vector<std::string_view>& names);

template <typename Part>
[[nodiscard]] std::string expected_name(const std::vector<Part>& parts) {
  std::vector<std::string_view> names;
  for (const Part& part : parts) names.push_back(part.name);
  return expected_one_of(names);
}

}  // namespace pathvet::xml
