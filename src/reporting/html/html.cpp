#include "pathvet/reporting/html.hpp"

#include <fmt/format.h>

#include <array>
#include <charconv>
#include <ostream>
#include <stdexcept>

#include "pathvet/reporting/caution.hpp"
#include "reporting/html/curves_json.hpp"
#include "reporting/html/page.hpp"
#include "reporting/json_report.hpp"
#include "reporting/phrases.hpp"

namespace pathvet {
namespace {

using namespace reporting;

/// As many digits of a number as the page shows, and some more.
Json shortened(const Json& value) {
  if (!value.is_number_float()) return value;
  const std::string text = fmt::format("{:.7g}", value.get<double>());
  double out = 0;
  std::from_chars(text.data(), text.data() + text.size(), out);
  return number(out);
}

/// What the page shows of the segments, as one object of lists: of ten thousand segments each name stands
/// only once.
Json segments_by_column(const Json& segments) {
  constexpr std::array whole = {"index",     "from",       "to",      "move",       "line",
                                "length_mm", "duration_s", "dwell_s", "peak_joint", "limit_margin_joint",
                                "findings"};
  constexpr std::array figures = {"peak_ratio", "min_singular_value", "limit_margin", "highest_speed"};
  Json columns = Json::object();
  for (const Json& segment : segments) {
    for (const char* name : whole) columns[name].push_back(segment.at(name));
    for (const char* name : figures) columns[name].push_back(shortened(segment.at(name)));
  }
  return columns;
}

/// The report's data with the curves; a JSON text that may stand between script tags.
std::string data(const Report& report, const std::vector<PathCurves>& curves) {
  Json root = report_json(report);
  root["strict"] = report.strict;
  for (std::size_t i = 0; i < report.paths.size(); ++i) {
    Json& path = root["paths"][i];
    path["segments"] = segments_by_column(path["segments"]);
    path["curves"] = curves_json(report.paths[i], curves.at(i));
  }
  std::string text = root.dump(-1, ' ', false, Json::error_handler_t::replace);
  std::string safe;
  safe.reserve(text.size());
  for (char letter : text) {
    if (letter == '<') {
      safe += "\\u003c";
    } else {
      safe += letter;
    }
  }
  return safe;
}

std::string escaped(std::string_view text) {
  std::string out;
  for (char letter : text) {
    switch (letter) {
      case '&':
        out += "&amp;";
        break;
      case '<':
        out += "&lt;";
        break;
      case '>':
        out += "&gt;";
        break;
      default:
        out += letter;
    }
  }
  return out;
}

/// What a reader without scripts sees beside the caution.
std::string verdict_sentence(const Report& report) {
  const std::string counts =
      report.errors() + report.warnings() == 0
          ? "nothing found"
          : counted(report.errors(), "error") + ", " + counted(report.warnings(), "warning");
  return std::string(report.is_flagged() ? "Flagged" : "Clear") + ": " + counts;
}

std::string title(const Report& report) {
  if (report.paths.size() != 1) return std::to_string(report.paths.size()) + " paths";
  const PathResult& path = report.paths.front();
  return path.name.empty() ? path.file : path.name;
}

}  // namespace

void write_html(const Report& report, const std::vector<PathCurves>& curves, std::ostream& out) {
  std::string_view rest = page::frame;
  while (!rest.empty()) {
    const std::size_t at = rest.find('@');
    out << rest.substr(0, at);
    if (at == std::string_view::npos) break;
    rest.remove_prefix(at + 1);
    const std::string_view name = rest.substr(0, rest.find('@'));
    if (name.size() == rest.size()) throw std::logic_error("page.html: a place without an end");
    rest.remove_prefix(name.size() + 1);
    if (name == "TITLE") {
      out << escaped(title(report));
    } else if (name == "VERDICT") {
      out << escaped(verdict_sentence(report));
    } else if (name == "CAUTION") {
      out << escaped(caution());
    } else if (name == "STYLE") {
      out << page::style;
    } else if (name == "LIBRARIES") {
      out << page::libraries;
    } else if (name == "SCRIPT") {
      out << page::script;
    } else if (name == "DATA") {
      out << data(report, curves);
    } else {
      throw std::logic_error("page.html: a place of an unknown name");
    }
  }
}

}  // namespace pathvet
