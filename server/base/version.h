// The program's version, set by the build from CMakeLists.txt.
#pragma once

namespace hearthfront::server {

inline constexpr const char* version = HEARTHFRONT_VERSION;

}  // namespace hearthfront::server
