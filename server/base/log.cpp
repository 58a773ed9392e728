#include "server/base/log.h"

#include <spdlog/sinks/stdout_sinks.h>
#include <spdlog/spdlog.h>

#include "server/base/number_text.h"
#include "server/base/utf8.h"

namespace hearthfront::server {
namespace {

constexpr std::size_t max_text_bytes = 1000;

spdlog::logger& logger() {
  // Never destroyed: threads may log while the process ends.
  static spdlog::logger& only = []() -> spdlog::logger& {
    auto* made = new spdlog::logger("hearthfront", std::make_shared<spdlog::sinks::stderr_sink_mt>());
    made->set_pattern("%Y-%m-%dT%H:%M:%S.%eZ %l %v", spdlog::pattern_time_type::utc);
    made->flush_on(spdlog::level::warn);
    made->set_error_handler([](const std::string&) {});
    return *made;
  }();
  return only;
}

spdlog::level::level_enum level_of(LogLevel level) {
  switch (level) {
    case LogLevel::debug:
      return spdlog::level::debug;
    case LogLevel::info:
      return spdlog::level::info;
    case LogLevel::warn:
      return spdlog::level::warn;
    case LogLevel::error:
      return spdlog::level::err;
  }
  return spdlog::level::err;
}

void append_hex(std::string& line, char c) {
  constexpr char digits[] = "0123456789abcdef";
  const auto byte = static_cast<unsigned char>(c);
  line += "\\x";
  line += digits[byte >> 4];
  line += digits[byte & 15];
}

void append_escaped(std::string& line, std::string_view text) {
  const bool cut = text.size() > max_text_bytes;
  text = text.substr(0, max_text_bytes);
  while (!text.empty()) {
    const char c = text.front();
    std::size_t length = 1;
    if (c == '\n') {
      line += "\\n";
    } else if (c == '\r') {
      line += "\\r";
    } else if (c == '\t') {
      line += "\\t";
    } else if (c == '"' || c == '\\') {
      line += '\\';
      line += c;
    } else if ((c >= 0 && c < 0x20) || c == 0x7f) {
      append_hex(line, c);
    } else if (length = utf8_length(text); length == 0) {
      append_hex(line, c);
      length = 1;
    } else if (length == 2 && c == '\xc2' && static_cast<unsigned char>(text[1]) < 0xa0) {
      append_hex(line, text[0]);  // the C1 controls steer terminals too
      append_hex(line, text[1]);
    } else {
      line += text.substr(0, length);
    }
    text.remove_prefix(length);
  }
  if (cut) line += "...";
}

bool is_plain(std::string_view value) {
  if (value.empty() || value.size() > max_text_bytes) return false;
  for (const char c : value) {
    const bool alphanumeric = (c >= '0' && c <= '9') || (c >= 'a' && c <= 'z') || (c >= 'A' && c <= 'Z');
    if (!alphanumeric && std::string_view("-_.:/+%").find(c) == std::string_view::npos) return false;
  }
  return true;
}

void write(LogLevel level, std::string_view message, LogFields fields) {
  try {
    if (logger().should_log(level_of(level)))
      logger().log(level_of(level), spdlog::string_view_t(log_line(message, fields)));
  } catch (...) {  // out of memory; a lost line must not take the daemon with it
  }
}

}  // namespace

LogField::LogField(std::string_view field_key, double number) : key(field_key), value(number_text(number)) {}

std::optional<LogLevel> log_level_from(std::string_view word) {
  if (word == "debug") return LogLevel::debug;
  if (word == "info") return LogLevel::info;
  if (word == "warn") return LogLevel::warn;
  if (word == "error") return LogLevel::error;
  return {};
}

void set_log_level(LogLevel level) {
  logger().set_level(level_of(level));
}
void flush_log() {
  logger().flush();
}

void log_debug(std::string_view message, LogFields fields) {
  write(LogLevel::debug, message, fields);
}
void log_info(std::string_view message, LogFields fields) {
  write(LogLevel::info, message, fields);
}
void log_warn(std::string_view message, LogFields fields) {
  write(LogLevel::warn, message, fields);
}
void log_error(std::string_view message, LogFields fields) {
  write(LogLevel::error, message, fields);
}

std::string log_line(std::string_view message, LogFields fields) {
  std::string line;
  append_escaped(line, message);
  for (const LogField& field : fields) {
    line += ' ';
    line += field.key;
    line += '=';
    if (is_plain(field.value)) {
      line += field.value;
      continue;
    }
    line += '"';
    append_escaped(line, field.value);
    line += '"';
  }
  return line;
}

}  // namespace hearthfront::server
