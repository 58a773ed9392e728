// The log: one line for each event on stderr (the journal), "message key=value key="quoted value"".
// Thread-safe and synchronous, so that a crash loses nothing that was logged at warn or above. Values are
// escaped here: no text from outside can break a line or forge one. Logging never throws.
#pragma once

#include <cstdint>
#include <initializer_list>
#include <optional>
#include <string>
#include <string_view>
#include <type_traits>

namespace hearthfront::server {

enum class LogLevel { debug, info, warn, error };
std::optional<LogLevel> log_level_from(std::string_view word);
void set_log_level(LogLevel level);  // default info
void flush_log();

// One key=value. The key is one of our own words; the value may be anything.
struct LogField {
  LogField(std::string_view field_key, std::string_view text) : key(field_key), value(text) {}
  LogField(std::string_view field_key, const char* text) : key(field_key), value(text) {}
  LogField(std::string_view field_key, const std::string& text) : key(field_key), value(text) {}
  LogField(std::string_view field_key, bool yes) : key(field_key), value(yes ? "yes" : "no") {}
  LogField(std::string_view field_key, double number);
  template <typename Integer>
  requires std::is_integral_v<Integer> LogField(std::string_view field_key, Integer number)
      : key(field_key), value(std::to_string(number)) {}

  std::string_view key;
  std::string value;
};
using LogFields = std::initializer_list<LogField>;

void log_debug(std::string_view message, LogFields fields = {});
void log_info(std::string_view message, LogFields fields = {});
void log_warn(std::string_view message, LogFields fields = {});
void log_error(std::string_view message, LogFields fields = {});

// The line without time and level. Control characters, quotes and backslashes are escaped, bytes that are
// not UTF-8 become \xNN, texts are cut at 1000 bytes.
std::string log_line(std::string_view message, LogFields fields);

}  // namespace hearthfront::server
