#pragma once

#include <string_view>

/// The parts of the page, put into the program by CMake from src/reporting/html/page and from Debian's
/// packages.
namespace pathvet::reporting::page {

extern const std::string_view frame;      ///< page.html, with places marked @NAME@
extern const std::string_view style;      ///< page.css after the charts' own
extern const std::string_view libraries;  ///< charts and 3-D, with their licences
extern const std::string_view script;     ///< all of page/*.js in the order of their names

}  // namespace pathvet::reporting::page
