// Explains to people why a text is not JSON: where it breaks and what the usual cause looks like.
// Pure, any thread, no failure.
#pragma once

#include <cstddef>
#include <string>
#include <string_view>

namespace hearthfront::server {

// `byte`: number of bytes a JSON parser had read when it gave up (from 1; beyond the end = text too short).
std::string json_fault_detail(std::string_view body, std::size_t byte);

}  // namespace hearthfront::server
