# The HTML page as part of the library: its own files and, from Debian, the charts and the 3-D view.

# Sets `out` to the file, or says which package has it.
function(pathvet_page_part out name folder package)
  find_file(${out} NAMES ${name} PATHS /usr/share/javascript PATH_SUFFIXES ${folder} NO_DEFAULT_PATH)
  if(NOT ${out})
    message(FATAL_ERROR "The HTML report needs ${folder}/${name}, which Debian has in ${package}: apt-get install ${package}")
  endif()
  mark_as_advanced(${out})
endfunction()
pathvet_page_part(PATHVET_CHARTS dygraph.min.js dygraphs libjs-dygraphs)
pathvet_page_part(PATHVET_CHARTS_STYLE dygraph.min.css dygraphs libjs-dygraphs)
pathvet_page_part(PATHVET_THREE three.min.js three libjs-three)
pathvet_page_part(PATHVET_THREE_PROJECTOR Projector.js three/examples/js/renderers libjs-three)
pathvet_page_part(PATHVET_THREE_SVG SVGRenderer.js three/examples/js/renderers libjs-three)

set(html ${CMAKE_CURRENT_SOURCE_DIR}/src/reporting/html)
set(page_source ${CMAKE_CURRENT_BINARY_DIR}/page.cpp)
set(page_libraries ${PATHVET_CHARTS} ${PATHVET_THREE} ${PATHVET_THREE_PROJECTOR} ${PATHVET_THREE_SVG})
file(GLOB page_files CONFIGURE_DEPENDS ${html}/page/*)
string(REPLACE ";" "," page_list "${page_libraries}")
add_custom_command(
  OUTPUT ${page_source}
  COMMAND ${CMAKE_COMMAND} -D OUTPUT=${page_source} -D PAGE=${html}/page -D LIBRARIES=${page_list}
          -D LIBRARY_STYLE=${PATHVET_CHARTS_STYLE} -P ${html}/embed.cmake
  DEPENDS ${page_files} ${page_libraries} ${PATHVET_CHARTS_STYLE} ${html}/embed.cmake
  VERBATIM)
# The standard asks compilers for 65536 characters in a literal; those that we build with take any number.
set_source_files_properties(${page_source} PROPERTIES COMPILE_OPTIONS -Wno-overlength-strings)
target_sources(pathvet_reporting PRIVATE ${page_source})
