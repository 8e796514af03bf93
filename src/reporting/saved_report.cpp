#include <fmt/format.h>

#include <algorithm>

#include "pathvet/reporting/compare.hpp"
#include "reporting/json_values.hpp"

namespace pathvet {
namespace {

using namespace reporting;

/// Members of one object; whoever asks for one that isn't there gets an exception that says where it should
/// be.
struct WrongMember {
  std::string what;
};

class Members {
 public:
  Members(const Json& object, std::string place) : object_(object), place_(std::move(place)) {
    if (!object.is_object()) throw WrongMember{(place_.empty() ? "the whole" : place_) + " is no object"};
  }

  [[nodiscard]] std::string text(const char* key) const {
    const Json& value = member(key);
    if (!value.is_string()) throw WrongMember{where(key) + " is no text"};
    return value.get<std::string>();
  }
  [[nodiscard]] std::string text_or_empty(const char* key) const {
    return member(key).is_null() ? "" : text(key);
  }
  [[nodiscard]] double number(const char* key) const {
    const Json& value = member(key);
    if (!value.is_number()) throw WrongMember{where(key) + " is no number"};
    return value.get<double>();
  }
  [[nodiscard]] std::optional<double> number_or_none(const char* key) const {
    if (!object_.contains(key) || object_.at(key).is_null()) return std::nullopt;
    return number(key);
  }
  /// In 0 to `most`.
  [[nodiscard]] int count(const char* key, std::size_t most) const {
    const double value = number(key);
    if (!(value >= 0 && value <= static_cast<double>(most))) {
      throw WrongMember{fmt::format("{} is not in 0 to {}", where(key), most)};
    }
    return static_cast<int>(value);
  }
  [[nodiscard]] const Json& object(const char* key) const {
    const Json& value = member(key);
    if (!value.is_object()) throw WrongMember{where(key) + " is no object"};
    return value;
  }
  /// What `read` makes of each element of a list.
  template <typename T, typename Reader>
  [[nodiscard]] std::vector<T> list(const char* key, const Reader& read) const {
    const Json& values = member(key);
    if (!values.is_array()) throw WrongMember{where(key) + " is no list"};
    std::vector<T> out;
    for (std::size_t i = 0; i < values.size(); ++i) {
      out.push_back(read(Members(values[i], fmt::format("{}/{}", where(key), i))));
    }
    return out;
  }
  [[nodiscard]] std::string where(const char* key) const { return place_ + (*key ? "/" : "") + key; }

 private:
  [[nodiscard]] const Json& member(const char* key) const {
    const auto found = object_.find(key);
    if (found == object_.end()) throw WrongMember{where(key) + " is missing"};
    return *found;
  }

  const Json& object_;
  std::string place_;
};

constexpr std::size_t most_lines = 2'000'000'000;

SavedSegment read_segment(const Members& in) {
  return {in.text("from"), in.text("to"), in.number_or_none("length_mm").value_or(0),
          in.number_or_none("duration_s").value_or(0)};
}

SavedFinding read_finding(const Members& in, std::size_t segments) {
  SavedFinding out;
  out.code = in.text("code");
  out.level = in.text("level");
  out.from = in.text("from");
  out.to = in.text("to");
  out.joint = in.text_or_empty("joint");
  out.message = in.text("message");
  out.unit = in.text_or_empty("unit");
  out.segment = in.count("segment", segments);
  if (out.segment < 1) throw WrongMember{in.where("segment") + " counts from 1"};
  out.line = in.count("line", most_lines);
  out.begin = in.number("begin");
  out.end = in.number("end");
  out.begin_mm = in.number_or_none("begin_mm").value_or(0);
  out.end_mm = in.number_or_none("end_mm").value_or(0);
  out.begin_s = in.number_or_none("begin_s").value_or(0);
  out.end_s = in.number_or_none("end_s").value_or(0);
  out.value = in.number_or_none("value");
  out.limit = in.number_or_none("limit");
  out.ratio = in.number_or_none("ratio");
  return out;
}

SavedPath read_path(const Members& in) {
  SavedPath out;
  out.file = in.text("file");
  out.name = in.text("name");
  out.segments = in.list<SavedSegment>("segments", read_segment);
  const std::size_t segments = out.segments.size();
  out.findings = in.list<SavedFinding>(
      "findings", [segments](const Members& finding) { return read_finding(finding, segments); });
  return out;
}

SavedReport read_root(const std::string& file, const Json& json) {
  const Members root(json, "");
  if (root.text("format") != "pathvet-report") {
    throw WrongMember{"/format is not \"pathvet-report\""};
  }
  if (root.number("version") != 1) throw WrongMember{"/version is not 1, the only one known"};
  SavedReport out;
  out.file = file;
  out.verdict = root.text("verdict");
  for (const auto& [key, value] : root.object("settings").items()) {
    out.settings.push_back(key + " = " + value.dump());
  }
  out.paths = root.list<SavedPath>("paths", read_path);
  return out;
}

/// Of the byte with this number (from 1); columns count characters.
SourcePlace place_of(const std::string& text, std::size_t byte) {
  SourcePlace place{1, 1};
  const std::size_t count = std::min(byte > 0 ? byte - 1 : 0, text.size());
  for (std::size_t i = 0; i < count; ++i) {
    const auto letter = static_cast<unsigned char>(text[i]);
    if (letter == '\n') {
      ++place.line;
      place.column = 1;
    } else if ((letter & 0xC0U) != 0x80U) {
      ++place.column;
    }
  }
  return place;
}

Fault fault(const std::string& file, SourcePlace place, const std::string& what) {
  return {file, place, what + "; expected is what pathvet check --json writes"};
}

}  // namespace

Reading<SavedReport> read_saved_report(const std::string& file, const std::string& text) {
  Json json;
  try {
    json = Json::parse(text);
  } catch (const Json::parse_error& error) {
    return {std::nullopt, {fault(file, place_of(text, error.byte), "this is no JSON")}};
  } catch (const Json::exception&) {
    // A number beyond the range of double: the parser doesn't say where.
    return {std::nullopt, {fault(file, {1, 1}, "a number is too large")}};
  }
  try {
    return {read_root(file, json), {}};
  } catch (const WrongMember& wrong) {
    return {std::nullopt, {fault(file, {1, 1}, "this is no pathvet report: " + wrong.what)}};
  }
}

}  // namespace pathvet
