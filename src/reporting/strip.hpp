#pragma once

#include <string>
#include <vector>

namespace pathvet::reporting {

/// A profile of shares (1: at the limit) as `columns` characters: eight heights up to the limit, '!' above
/// it. Where several values fall on one character, the greatest counts. Empty for an empty profile.
[[nodiscard]] std::string strip(const std::vector<double>& profile, int columns, bool unicode);

}  // namespace pathvet::reporting
