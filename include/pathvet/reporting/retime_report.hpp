#pragma once

#include <iosfwd>
#include <optional>
#include <string>

#include "pathvet/model/arm.hpp"
#include "pathvet/reporting/text.hpp"
#include "pathvet/retiming/profile.hpp"
#include "pathvet/retiming/retime.hpp"

namespace pathvet {

/// Everything that the account of a re-timing says.
struct RetimeReport {
  std::string tool_version;
  std::string file;    ///< of the path as it was
  std::string output;  ///< where the path with the new speeds went; empty: nowhere
  std::string by;      ///< "segment", "stretch" or "profile"
  RetimeOptions options;
  std::optional<Retiming> retiming;  ///< none: only a profile was asked for
  std::optional<Profile> profile;
  PathResult before;     ///< the check of the path as it was
  bool flagged = false;  ///< the exit status is 1
};

/// The account for a person: cycle times and the bound, then each changed or flagged segment; the caution
/// last.
void write_retime_text(const RetimeReport& report, std::ostream& out, const TextStyle& style);

/// The same as data: "pathvet-retiming", mm, deg and s.
void write_retime_json(const RetimeReport& report, std::ostream& out);

/// The profile as CSV: segment, fraction, time_s, tcp_speed, joints, joints with _speed, joints with
/// _acceleration.
void write_profile_csv(const Profile& profile, const Arm& arm, std::ostream& out);

}  // namespace pathvet
