#include "server/ingest/csv_number.h"

#include <charconv>

#include "server/ingest/csv_text.h"

namespace hearthfront::server {
namespace {

bool is_digit(char c) {
  return c >= '0' && c <= '9';
}

// Bytes of a grouping sign at the start of the text, 0 where there is none.
std::size_t grouping_length(std::string_view text, char thousands) {
  if (thousands == '\0' || text.empty()) return 0;
  if (text.front() == thousands) return 1;
  if (thousands == ' ' && text.starts_with("\xc2\xa0")) return 2;      // no-break space
  if (thousands == ' ' && text.starts_with("\xe2\x80\xaf")) return 3;  // narrow no-break space
  return 0;
}

}  // namespace

std::optional<double> parse_decimal(std::string_view cell, char decimal, std::string& reason,
                                    char thousands) {
  std::string number;  // as std::from_chars wants it
  std::size_t i = 0, digits = 0;
  const auto take_digits = [&] {
    for (; i < cell.size() && is_digit(cell[i]); ++i, ++digits) number += cell[i];
  };
  if (i < cell.size() && (cell[i] == '+' || cell[i] == '-')) {
    if (cell[i] == '-') number += '-';
    ++i;
  }
  take_digits();
  bool grouped_well = true;
  for (bool first = true; grouped_well; first = false) {
    const std::size_t sign = grouping_length(cell.substr(i), thousands);
    if (sign == 0) break;
    const std::size_t before = digits;
    grouped_well = !first || (before >= 1 && before <= 3);
    i += sign;
    take_digits();
    grouped_well = grouped_well && digits - before == 3;
  }
  if (i < cell.size() && cell[i] == decimal) {
    number += '.';
    ++i;
    take_digits();
  }
  const bool has_mantissa = digits > 0 && grouped_well;
  if (has_mantissa && i < cell.size() && (cell[i] == 'e' || cell[i] == 'E')) {
    number += cell[i++];
    if (i < cell.size() && (cell[i] == '+' || cell[i] == '-')) number += cell[i++];
    digits = 0;
    take_digits();
  }
  if (!has_mantissa || digits == 0 || i != cell.size()) {
    const char other = decimal == '.' ? ',' : '.';
    reason = quoted_text(cell) + " is not a number";
    if (!grouped_well)
      reason += " (digits are not in groups of three)";
    else if (has_mantissa && i < cell.size() && cell[i] == other)
      reason += std::string(" (the mapping's decimal sign is \"") + decimal + "\")";
    return {};
  }
  double value = 0;
  if (std::from_chars(number.data(), number.data() + number.size(), value).ec != std::errc{}) {
    reason = quoted_text(cell) + " is beyond what a 64-bit floating point number can hold";
    return {};
  }
  return value;
}

}  // namespace hearthfront::server
