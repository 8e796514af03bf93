# Puts the parts of the HTML page into a C++ source:
#   cmake -D OUTPUT=page.cpp -D PAGE=<folder> -D LIBRARIES=<files> -D LIBRARY_STYLE=<file> -P embed.cmake
# Files in a list are separated by commas.
cmake_minimum_required(VERSION 3.25)

string(REPLACE "," ";" libraries "${LIBRARIES}")
file(GLOB scripts ${PAGE}/*.js)
list(SORT scripts)

set(source "#include \"reporting/html/page.hpp\"\n\nnamespace pathvet::reporting::page {\n")
# Adds one constant: the text of the files in a row.
function(embed name)
  set(joined "")
  foreach(file IN LISTS ARGN)
    file(READ "${file}" text)
    string(APPEND joined "${text}\n")
  endforeach()
  string(FIND "${joined}" ")page\"" end)
  if(NOT end EQUAL -1)
    message(FATAL_ERROR "one of ${ARGN} holds )page\", which would end the literal")
  endif()
  string(FIND "${joined}" "</script" end)
  if(NOT name STREQUAL "frame" AND NOT end EQUAL -1)
    message(FATAL_ERROR "one of ${ARGN} would end the page's script")
  endif()
  set(source "${source}\nconst std::string_view ${name} = R\"page(${joined})page\";\n" PARENT_SCOPE)
endfunction()

embed(frame ${PAGE}/page.html)
embed(style ${LIBRARY_STYLE} ${PAGE}/page.css)
embed(libraries ${PAGE}/licences.txt ${libraries})
embed(script ${scripts})
file(WRITE ${OUTPUT} "${source}\n}  // namespace pathvet::reporting::page\n")
