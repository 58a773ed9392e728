// "Did you mean ...": the known word closest to a mistyped one. Pure, any thread.
#pragma once

#include <string>
#include <string_view>
#include <vector>

namespace hearthfront::server {

// The closest of `known` by edit distance (swapped neighbours count as one edit, letter case as none),
// or empty where none is close: more than one edit and more than a third of the word.
std::string nearest(std::string_view word, const std::vector<std::string>& known);

// ` (did you mean "x"?)` or empty.
std::string suggestion(std::string_view word, const std::vector<std::string>& known);

}  // namespace hearthfront::server
