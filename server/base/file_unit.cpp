#include "server/base/file_unit.h"

#include <algorithm>
#include <array>
#include <stdexcept>

namespace hearthfront::server {
namespace {

constexpr std::array<std::pair<FileUnit, std::string_view>, 14> words{{
    {FileUnit::degc, "degC"},
    {FileUnit::degf, "degF"},
    {FileUnit::kelvin, "K"},
    {FileUnit::millivolt, "mV"},
    {FileUnit::volt, "V"},
    {FileUnit::microvolt, "uV"},
    {FileUnit::weight_percent, "wt_pct"},
    {FileUnit::volume_percent, "vol_pct"},
    {FileUnit::ppm, "ppm"},
    {FileUnit::pascal, "Pa"},
    {FileUnit::hectopascal, "hPa"},
    {FileUnit::kilopascal, "kPa"},
    {FileUnit::bar, "bar"},
    {FileUnit::count, "count"},
}};

char lower(char c) {
  return c >= 'A' && c <= 'Z' ? static_cast<char>(c - 'A' + 'a') : c;
}

// Lower case, the degree sign (also the ordinal sign that stands for it) as "deg", micro as "u".
std::string plain(std::string_view text) {
  std::string result;
  for (std::size_t i = 0; i < text.size(); ++i) {
    const std::string_view pair = text.substr(i, 2);
    if (pair == "\xc2\xb0" || pair == "\xc2\xba") {
      result += "deg";
      ++i;
    } else if (pair == "\xc2\xb5" || pair == "\xce\xbc") {
      result += 'u';
      ++i;
    } else {
      result += lower(text[i]);
    }
  }
  return result;
}

bool is_letter(char c) {
  return (c >= 'a' && c <= 'z') || static_cast<unsigned char>(c) >= 0x80;
}

// Runs of letters; "%" is a word of its own.
std::vector<std::string> tokens_of(const std::string& text) {
  std::vector<std::string> tokens;
  for (std::size_t i = 0; i < text.size();) {
    if (text[i] == '%') {
      tokens.emplace_back("%");
      ++i;
    } else if (is_letter(text[i])) {
      const std::size_t start = i;
      while (i < text.size() && is_letter(text[i])) ++i;
      tokens.push_back(text.substr(start, i - start));
    } else {
      ++i;
    }
  }
  return tokens;
}

bool one_of(std::string_view word, std::initializer_list<std::string_view> list) {
  return std::find(list.begin(), list.end(), word) != list.end();
}

std::optional<FileUnit> unit_of_token(const std::string& token, Role role) {
  switch (role) {
    case Role::temperature:
    case Role::load_temperature:
    case Role::probe_temperature:
    case Role::dew_point:
      if (one_of(token, {"degc", "c", "celsius", "grdc"})) return FileUnit::degc;
      if (one_of(token, {"degf", "f", "fahrenheit"})) return FileUnit::degf;
      if (one_of(token, {"k", "kelvin"})) return FileUnit::kelvin;
      return {};
    case Role::probe_emf:
      if (one_of(token, {"mv", "millivolt", "millivolts"})) return FileUnit::millivolt;
      if (one_of(token, {"v", "volt", "volts"})) return FileUnit::volt;
      if (one_of(token, {"uv", "microvolt", "microvolts"})) return FileUnit::microvolt;
      return {};
    case Role::carbon_potential:
      if (one_of(token, {"%", "pct", "wt", "percent", "prozent"})) return FileUnit::weight_percent;
      return {};
    case Role::co:
    case Role::h2:
    case Role::co2:
      if (one_of(token, {"%", "pct", "vol", "percent", "prozent"})) return FileUnit::volume_percent;
      if (one_of(token, {"ppm", "ppmv", "vpm"})) return FileUnit::ppm;
      return {};
    case Role::pressure:
      if (token == "pa") return FileUnit::pascal;
      if (one_of(token, {"hpa", "mbar"})) return FileUnit::hectopascal;
      if (token == "kpa") return FileUnit::kilopascal;
      if (token == "bar") return FileUnit::bar;
      return {};
    case Role::push:
      if (one_of(token, {"count", "counts", "pushes"})) return FileUnit::count;
      return {};
  }
  return {};
}

}  // namespace

std::string_view text(FileUnit unit) {
  for (const auto& [known, word] : words) {
    if (known == unit) return word;
  }
  throw std::logic_error("file_unit: a unit without a word");
}

std::string all_file_units() {
  std::string list;
  for (std::size_t i = 0; i < words.size(); ++i)
    list.append(i == 0 ? "" : i + 1 == words.size() ? " or " : ", ").append(words[i].second);
  return list;
}

std::optional<FileUnit> file_unit_from(std::string_view word) {
  for (const auto& [unit, known] : words) {
    if (known == word) return unit;
  }
  return {};
}

FileUnit file_unit_of(Unit unit) {
  switch (unit) {
    case Unit::degc:
      return FileUnit::degc;
    case Unit::degf:
      return FileUnit::degf;
    case Unit::millivolt:
      return FileUnit::millivolt;
    case Unit::weight_percent:
      return FileUnit::weight_percent;
    case Unit::volume_percent:
      return FileUnit::volume_percent;
    case Unit::hectopascal:
      return FileUnit::hectopascal;
    case Unit::count:
      return FileUnit::count;
  }
  throw std::logic_error("file_unit: a unit of a channel that files do not have");
}

bool unit_fits(Role role, FileUnit unit) {
  switch (unit) {
    case FileUnit::degc:
    case FileUnit::degf:
    case FileUnit::kelvin:
      return unit_fits(role, Unit::degc);
    case FileUnit::millivolt:
    case FileUnit::volt:
    case FileUnit::microvolt:
      return unit_fits(role, Unit::millivolt);
    case FileUnit::weight_percent:
      return unit_fits(role, Unit::weight_percent);
    case FileUnit::volume_percent:
    case FileUnit::ppm:
      return unit_fits(role, Unit::volume_percent);
    case FileUnit::pascal:
    case FileUnit::hectopascal:
    case FileUnit::kilopascal:
    case FileUnit::bar:
      return unit_fits(role, Unit::hectopascal);
    case FileUnit::count:
      return unit_fits(role, Unit::count);
  }
  return false;
}

std::vector<std::string> file_units_of(Role role) {
  std::vector<std::string> list;
  for (const auto& [unit, word] : words) {
    if (unit_fits(role, unit)) list.emplace_back(word);
  }
  return list;
}

double convert(double value, FileUnit from, Unit to) {
  switch (from) {
    case FileUnit::degc:
      return convert(value, Unit::degc, to);
    case FileUnit::degf:
      return convert(value, Unit::degf, to);
    case FileUnit::kelvin:
      return convert(value - 273.15, Unit::degc, to);
    case FileUnit::millivolt:
      return convert(value, Unit::millivolt, to);
    case FileUnit::volt:
      return convert(value * 1000, Unit::millivolt, to);
    case FileUnit::microvolt:
      return convert(value / 1000, Unit::millivolt, to);
    case FileUnit::weight_percent:
      return convert(value, Unit::weight_percent, to);
    case FileUnit::volume_percent:
      return convert(value, Unit::volume_percent, to);
    case FileUnit::ppm:
      return convert(value / 10'000, Unit::volume_percent, to);
    case FileUnit::pascal:
      return convert(value / 100, Unit::hectopascal, to);
    case FileUnit::hectopascal:
      return convert(value, Unit::hectopascal, to);
    case FileUnit::kilopascal:
      return convert(value * 10, Unit::hectopascal, to);
    case FileUnit::bar:
      return convert(value * 1000, Unit::hectopascal, to);
    case FileUnit::count:
      return convert(value, Unit::count, to);
  }
  throw std::logic_error("file_unit: a unit without conversion");
}

std::optional<FileUnit> unit_in_words(std::string_view header, Role role) {
  const std::vector<std::string> tokens = tokens_of(plain(header));
  // From the end, since the unit follows the name. A single letter is a unit only as the last word: C may
  // also be the carbon in "C-Pot" and "% C", K a kind of thermocouple.
  for (std::size_t i = tokens.size(); i-- > 0;) {
    const bool letter = tokens[i].size() == 1 && tokens[i] != "%";
    const std::string before = i > 0 ? tokens[i - 1] : "";
    if (letter && (i + 1 < tokens.size() || one_of(before, {"%", "pct", "type", "typ"}))) continue;
    if (const auto unit = unit_of_token(tokens[i], role)) return unit;
  }
  return {};
}

bool is_unit_word(std::string_view cell) {
  const std::vector<std::string> tokens = tokens_of(plain(cell));
  const auto is_unit = [](const std::string& token) {
    for (const Role role :
         {Role::temperature, Role::probe_emf, Role::carbon_potential, Role::co, Role::pressure}) {
      if (unit_of_token(token, role)) return true;
    }
    return one_of(token,
                  {"s",   "sec", "min", "h", "hh", "mm", "ss", "dd",  "yy", "yyyy", "bar", "mbar", "pa",
                   "kpa", "hpa", "l",   "m", "kw", "a",  "ma", "ppb", "by", "mass", "rpm", "hz"});
  };
  return !tokens.empty() && std::all_of(tokens.begin(), tokens.end(), is_unit);
}

}  // namespace hearthfront::server
