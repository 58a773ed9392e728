// Numbers as people write them, without locale: the shortest text that reads back as the same value.
#pragma once

#include <string>

namespace hearthfront::server {

std::string number_text(double value);  // "0.2", "1000000", "1.25e-07", "nan"

}  // namespace hearthfront::server
