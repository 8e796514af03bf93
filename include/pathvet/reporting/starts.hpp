#pragma once

#include <iosfwd>

#include "pathvet/checks/rank_starts.hpp"
#include "pathvet/reporting/text.hpp"

namespace pathvet {

/// The ranking as a table for a person, best start first, and as JSON: {"format": "pathvet-starts", …,
/// "starts": […]}.
void write_starts_text(const StartRanking& ranking, std::ostream& out, const TextStyle& style);
void write_starts_json(const StartRanking& ranking, std::ostream& out);

}  // namespace pathvet
