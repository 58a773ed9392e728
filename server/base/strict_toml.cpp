#include "server/base/strict_toml.h"

#include <toml++/toml.h>
#include <algorithm>
#include <cerrno>
#include <cmath>
#include <filesystem>
#include <fstream>
#include <system_error>

#include "server/base/nearest.h"
#include "server/base/number_text.h"

namespace hearthfront::server {
namespace {

using Kind = ConfigValue::Kind;

constexpr std::size_t max_file_bytes = 1u << 20;

std::string at(const std::string& file, ConfigPlace place) {
  return file + ":" + std::to_string(place.line) + ":" + std::to_string(place.column);
}

ConfigPlace place_of(const toml::source_region& region) {
  return {region.begin.line, region.begin.column};
}

ConfigValue copy_of(const toml::node& node) {
  ConfigValue value;
  value.place = place_of(node.source());
  if (const auto* table = node.as_table()) {
    for (const auto& [key, member] : *table) {
      value.table.push_back({std::string(key.str()), place_of(key.source()), copy_of(member)});
    }
    std::stable_sort(
        value.table.begin(), value.table.end(), [](const ConfigMember& a, const ConfigMember& b) {
          return std::pair(a.place.line, a.place.column) < std::pair(b.place.line, b.place.column);
        });
  } else if (const auto* array = node.as_array()) {
    value.kind = Kind::array;
    for (const auto& element : *array) value.array.push_back(copy_of(element));
  } else if (const auto* text = node.as_string()) {
    value.kind = Kind::text;
    value.text = text->get();
  } else if (const auto* integer = node.as_integer()) {
    value.kind = Kind::integer;
    value.integer = integer->get();
  } else if (const auto* real = node.as_floating_point()) {
    value.kind = Kind::real;
    value.real = real->get();
  } else if (const auto* boolean = node.as_boolean()) {
    value.kind = Kind::boolean;
    value.boolean = boolean->get();
  } else {
    value.kind = Kind::date_time;
  }
  return value;
}

std::optional<std::string> content_of(const std::string& path, ConfigErrors& errors) {
  const auto refuse = [&](const std::string& why) {
    errors.messages.push_back(path + ": " + why);
    return std::optional<std::string>{};
  };
  std::error_code ignored;
  if (std::filesystem::is_directory(path, ignored)) return refuse("cannot be read: it is a folder");
  errno = 0;
  std::ifstream stream(path, std::ios::binary);
  std::string text(max_file_bytes + 1, '\0');
  stream.read(text.data(), static_cast<std::streamsize>(text.size()));
  if (stream.bad() || !stream.is_open()) {
    return refuse(std::string("cannot be read: ") + std::generic_category().message(errno));
  }
  text.resize(static_cast<std::size_t>(stream.gcount()));
  if (text.size() > max_file_bytes) return refuse("is larger than 1 MiB, so it is hardly the right file");
  return text;
}

bool has_control(std::string_view text) {
  return std::any_of(text.begin(), text.end(), [](char c) { return (c >= 0 && c < 0x20) || c == 0x7f; });
}

std::string_view name_of(Kind kind) {
  switch (kind) {
    case Kind::boolean:
      return "true or false";
    case Kind::integer:
      return "an integer";
    case Kind::real:
      return "a decimal number";
    case Kind::text:
      return "a string";
    case Kind::date_time:
      return "a date or time";
    case Kind::array:
      return "an array";
    case Kind::table:
      return "a table";
  }
  return "something else";
}

}  // namespace

std::optional<ConfigValue> parse_toml_file(const std::string& path, ConfigErrors& errors) {
  const std::optional<std::string> text = content_of(path, errors);
  if (!text) return {};
  try {
    return copy_of(toml::parse(*text, std::string_view(path)));
  } catch (const toml::parse_error& error) {
    errors.messages.push_back(at(path, place_of(error.source())) +
                              ": not valid TOML: " + std::string(error.description()));
    return {};
  }
}

ConfigTable::ConfigTable(const std::string& file, const ConfigValue& value, std::string name,
                         ConfigErrors& errors)
    : file_(file), value_(value), name_(std::move(name)), errors_(errors) {}

void ConfigTable::report(ConfigPlace place, std::string_view message) {
  errors_.messages.push_back(at(file_, place) + ": " + std::string(message));
}

const ConfigMember* ConfigTable::find(std::string_view key) {
  if (std::find(asked_.begin(), asked_.end(), key) == asked_.end()) asked_.emplace_back(key);
  for (const ConfigMember& member : value_.table) {
    if (member.key == key) return &member;
  }
  return nullptr;
}

const ConfigMember* ConfigTable::find_of(std::string_view key, Kind kind, std::string_view expected) {
  const ConfigMember* member = find(key);
  if (member == nullptr || member->value.kind == kind) return member;
  report(member->value.place, std::string(key) + ": expected " + std::string(expected) + ", got " +
                                  std::string(name_of(member->value.kind)));
  return nullptr;
}

bool ConfigTable::text(std::string_view key, std::string& into, std::size_t min_length,
                       std::size_t max_length) {
  const ConfigMember* member = find_of(key, Kind::text, "a string");
  if (member == nullptr) return false;
  const std::string& text = member->value.text;
  if (text.size() < min_length || text.size() > max_length) {
    const std::string wanted = text.size() < min_length && text.empty()
                                   ? "must not be empty"
                                   : "must have " + std::to_string(min_length) + " to " +
                                         std::to_string(max_length) + " bytes, has " +
                                         std::to_string(text.size());
    report(member->value.place, std::string(key) + ": " + wanted);
    return false;
  }
  if (has_control(text)) {
    report(member->value.place,
           std::string(key) + ": must not contain line breaks or other control characters");
    return false;
  }
  into = text;
  return true;
}

bool ConfigTable::boolean(std::string_view key, bool& into) {
  const ConfigMember* member = find_of(key, Kind::boolean, "true or false");
  if (member == nullptr) return false;
  into = member->value.boolean;
  return true;
}

bool ConfigTable::integer(std::string_view key, std::int64_t& into, std::int64_t low, std::int64_t high) {
  const ConfigMember* member = find_of(key, Kind::integer, "an integer");
  if (member == nullptr) return false;
  const std::int64_t value = member->value.integer;
  if (value < low || value > high) {
    report(member->value.place, std::string(key) + ": expected " + std::to_string(low) + " to " +
                                    std::to_string(high) + ", got " + std::to_string(value));
    return false;
  }
  into = value;
  return true;
}

bool ConfigTable::number(std::string_view key, double& into, double low, double high) {
  const ConfigMember* member = find(key);
  if (member == nullptr) return false;
  const bool whole = member->value.kind == Kind::integer;
  if (!whole && find_of(key, Kind::real, "a number") == nullptr) return false;
  const double value = whole ? static_cast<double>(member->value.integer) : member->value.real;
  if (!(value >= low && value <= high)) {  // NaN fails as well
    report(member->value.place, std::string(key) + ": expected " + number_text(low) + " to " +
                                    number_text(high) + ", got " + number_text(value));
    return false;
  }
  into = value;
  return true;
}

bool ConfigTable::number(std::string_view key, std::optional<double>& into, double low, double high) {
  double value = 0;
  if (!number(key, value, low, high)) return false;
  into = value;
  return true;
}

bool ConfigTable::raw_text(std::string_view key, std::string& into) {
  const ConfigMember* member = find_of(key, Kind::text, "a string");
  if (member == nullptr) return false;
  into = member->value.text;
  return true;
}

bool ConfigTable::texts(std::string_view key, std::vector<std::string>& into, std::size_t most,
                        std::size_t max_length) {
  const ConfigMember* member = find_of(key, Kind::array, "an array of strings");
  if (member == nullptr) return false;
  std::vector<std::string> found;
  for (const ConfigValue& element : member->value.array) {
    if (element.kind != Kind::text) {
      report(element.place, std::string(key) + ": expected words, got " + std::string(name_of(element.kind)));
      return false;
    }
    if (element.text.size() > max_length || has_control(element.text)) {
      report(element.place, std::string(key) + ": expected strings of at most " + std::to_string(max_length) +
                                " bytes without control characters");
      return false;
    }
    found.push_back(element.text);
  }
  if (found.size() > most) {
    report(member->value.place, std::string(key) + ": expected at most " + std::to_string(most) + " strings");
    return false;
  }
  into = std::move(found);
  return true;
}

bool ConfigTable::numbers(std::string_view key, std::vector<double>& into, std::size_t count, double low,
                          double high) {
  const std::string expected = "an array of " + std::to_string(count) + " numbers";
  const ConfigMember* member = find_of(key, Kind::array, expected);
  if (member == nullptr) return false;
  std::vector<double> values;
  for (const ConfigValue& element : member->value.array) {
    if (element.kind != Kind::integer && element.kind != Kind::real) {
      report(element.place,
             std::string(key) + ": expected a number, got " + std::string(name_of(element.kind)));
      return false;
    }
    values.push_back(element.kind == Kind::integer ? static_cast<double>(element.integer) : element.real);
    if (!(values.back() >= low && values.back() <= high)) {
      report(element.place, std::string(key) + ": expected " + number_text(low) + " to " + number_text(high) +
                                ", got " + number_text(values.back()));
      return false;
    }
  }
  if (values.size() != count) {
    report(member->value.place,
           std::string(key) + ": expected " + expected + ", got " + std::to_string(values.size()));
    return false;
  }
  into = std::move(values);
  return true;
}

std::optional<ConfigTable> ConfigTable::table(std::string_view key) {
  const ConfigMember* member = find_of(key, Kind::table, "a table");
  if (member == nullptr) return {};
  return ConfigTable(file_, member->value, "[" + std::string(key) + "]", errors_);
}

std::vector<ConfigTable> ConfigTable::tables(std::string_view key) {
  std::vector<ConfigTable> found;
  const ConfigMember* member =
      find_of(key, Kind::array, "an array of tables, [[" + std::string(key) + "]] or [{...}]");
  if (member == nullptr) return found;
  for (const ConfigValue& element : member->value.array) {
    if (element.kind == Kind::table) {
      found.emplace_back(file_, element, "[[" + std::string(key) + "]]", errors_);
    } else {
      report(element.place,
             std::string(key) + ": expected a table, got " + std::string(name_of(element.kind)));
    }
  }
  return found;
}

bool ConfigTable::has(std::string_view key) const {
  return std::any_of(value_.table.begin(), value_.table.end(),
                     [&](const auto& member) { return member.key == key; });
}

bool ConfigTable::has_empty_array(std::string_view key) const {
  return std::any_of(value_.table.begin(), value_.table.end(), [&](const auto& member) {
    return member.key == key && member.value.kind == Kind::array && member.value.array.empty();
  });
}

std::vector<std::string> ConfigTable::keys() const {
  std::vector<std::string> keys;
  for (const ConfigMember& member : value_.table) keys.push_back(member.key);
  return keys;
}

std::string ConfigTable::where(std::string_view key) const {
  for (const ConfigMember& member : value_.table) {
    if (member.key == key) return at(file_, member.value.place);
  }
  return at(file_, value_.place);
}

void ConfigTable::require(std::string_view key, std::string_view why) {
  if (!has(key)) {
    report(value_.place, name_ + ": " + std::string(key) + " is missing: " + std::string(why));
  }
}

void ConfigTable::fault(std::string_view key, std::string_view message) {
  errors_.messages.push_back(where(key) + ": " + std::string(key) + ": " + std::string(message));
}

void ConfigTable::fault_here(std::string_view message) {
  report(value_.place, name_ + ": " + std::string(message));
}

void ConfigTable::finish() {
  for (const ConfigMember& member : value_.table) {
    if (std::find(asked_.begin(), asked_.end(), member.key) != asked_.end()) continue;
    report(member.place, name_ + ": unknown key \"" + member.key + "\"" + suggestion(member.key, asked_));
  }
}

}  // namespace hearthfront::server
