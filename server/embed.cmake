# Writes a C++ file that holds the dashboard's files and the API description as bytes. Run at each build;
# the output is only touched when it differs.
#   cmake -DOUT=assets.cpp -DDIST=web/dist -DDESCRIPTION=openapi.yaml -P embed.cmake
set(arrays "")
set(entries "")
set(count 0)

macro(add_file url path)
  file(READ "${path}" hex HEX)
  file(SIZE "${path}" size)
  string(REGEX REPLACE "(..)" "\\\\x\\1" bytes "${hex}")
  string(LENGTH "${bytes}" length)
  set(lines "")
  set(at 0)
  # One literal of a whole file would be longer than compilers promise to take.
  while(at LESS length)
    string(SUBSTRING "${bytes}" ${at} 4000 piece)
    string(APPEND lines "    \"${piece}\"\n")
    math(EXPR at "${at} + 4000")
  endwhile()
  if(lines STREQUAL "")
    set(lines "    \"\"\n")
  endif()
  string(APPEND arrays "constexpr char file_${count}[] =\n${lines}    ;\n")
  string(APPEND entries "    {\"${url}\", {file_${count}, ${size}}},\n")
  math(EXPR count "${count} + 1")
endmacro()

file(GLOB_RECURSE dashboard LIST_DIRECTORIES false RELATIVE ${DIST} ${DIST}/*)
foreach(name ${dashboard})
  add_file("/${name}" "${DIST}/${name}")
endforeach()
if(NOT EXISTS ${DIST}/index.html)
  message(WARNING "The dashboard is not built (web/dist is empty): run 'npm ci && npm run build' in web/, or deploy/demo.")
  file(WRITE ${OUT}.html "<!doctype html><title>hearthfront</title><p>This binary was built without the dashboard. \
Run <code>npm ci &amp;&amp; npm run build</code> in web/ and build again.</p>\n")
  add_file("/index.html" ${OUT}.html)
endif()
add_file("/openapi.yaml" ${DESCRIPTION})

file(WRITE ${OUT}.new "#include <array>
#include <span>

#include \"server/api/assets.h\"

namespace hearthfront::server {
namespace {

${arrays}
constexpr std::array<Asset, ${count}> files{{
${entries}}};

}  // namespace

std::span<const Asset> embedded_assets();
std::span<const Asset> embedded_assets() { return files; }

}  // namespace hearthfront::server
")
file(COPY_FILE ${OUT}.new ${OUT} ONLY_IF_DIFFERENT)
