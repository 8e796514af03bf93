#pragma once

#include <cstddef>
#include <optional>
#include <string>
#include <string_view>

#include "xml/wellformed.hpp"

namespace pathvet::xml {

/// Moves `end` behind the XML declaration that `text` may begin with (production [23] of XML 1.0), or says
/// what is wrong with it. Another encoding than UTF-8 is wrong.
[[nodiscard]] std::optional<TextFault> skip_declaration(std::string_view text, std::size_t& end);

/// ASCII letters in lower case.
[[nodiscard]] std::string lowered(std::string_view text);

}  // namespace pathvet::xml
