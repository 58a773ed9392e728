#include "server/base/number_text.h"

#include <charconv>
#include <cmath>

namespace hearthfront::server {

std::string number_text(double value) {
  char buffer[64];
  // Plain digits in the range where people read them more easily than an exponent.
  const double size = std::fabs(value);
  const bool plain = value == 0 || (size >= 1e-4 && size < 1e15);
  const auto result = plain ? std::to_chars(buffer, buffer + sizeof buffer, value, std::chars_format::fixed)
                            : std::to_chars(buffer, buffer + sizeof buffer, value);
  return {buffer, result.ptr};
}

}  // namespace hearthfront::server
