#pragma once

#include <string>
#include <string_view>

/// Text as other formats want it.
namespace pathvet::reporting {

/// Bytes that are no UTF-8 become U+FFFD.
[[nodiscard]] std::string valid_utf8(const std::string& text);

/// For the content of elements and of attributes in double quotes, XML 1.0: characters that XML can't hold
/// become U+FFFD; line breaks are kept in attributes too.
[[nodiscard]] std::string xml_escaped(const std::string& text);

/// A field of CSV that holds text (RFC 4180): quoted where it has to be, and with an apostrophe before it
/// where a spreadsheet would take it for a formula.
[[nodiscard]] std::string csv_text(const std::string& text);

/// The file's name as a URI reference (RFC 3986); absolute names become file URIs.
[[nodiscard]] std::string uri_of_file(std::string_view file);

}  // namespace pathvet::reporting
