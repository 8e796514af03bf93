#include "pathvet/checks/finding.hpp"

#include <array>

namespace pathvet {
namespace {

struct CodeRow {
  const char* name;
  Level level;
};

// In the order of Code.
constexpr std::array<CodeRow, 12> code_rows = {{
    {"arm-speed", Level::warning},
    {"branch-flip", Level::error},
    {"joint-acceleration", Level::error},
    {"joint-jump", Level::error},
    {"joint-limit", Level::error},
    {"joint-speed", Level::error},
    {"limit-margin", Level::warning},
    {"out-of-reach", Level::error},
    {"singular-pass", Level::warning},
    {"speed-margin", Level::warning},
    {"taught-mismatch", Level::error},
    {"unproven", Level::warning},
}};
static_assert(code_rows.size() == static_cast<std::size_t>(Code::unproven) + 1);

constexpr std::array<const char*, 4> kind_names = {"wrist", "elbow", "shoulder", "general"};
static_assert(kind_names.size() == static_cast<std::size_t>(SingularKind::general) + 1);

}  // namespace

const char* name(Code code) {
  return code_rows.at(static_cast<std::size_t>(code)).name;
}

Level level(Code code) {
  return code_rows.at(static_cast<std::size_t>(code)).level;
}

const char* name(SingularKind kind) {
  return kind_names.at(static_cast<std::size_t>(kind));
}

}  // namespace pathvet
