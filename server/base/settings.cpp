#include "server/base/settings.h"

#include <arpa/inet.h>

#include <deque>

#include "server/base/log.h"
#include "server/base/number_text.h"
#include "server/base/strict_toml.h"
#include "server/base/time_text.h"

namespace hearthfront::server {
namespace {

// The one list of options: reading and listing both go through it, so that neither can forget one.
// A visitor is called with (table, key, the option, lower limit, upper limit).
template <typename AnySettings, typename Visitor>
void each_option(AnySettings& s, Visitor&& visit) {
  visit("listen", "address", s.listen.address, 1, 100);
  visit("listen", "port", s.listen.port, 0, 65'535);
  visit("files", "database", s.files.database, 1, 1000);
  visit("files", "plant", s.files.plant, 1, 1000);
  visit("files", "steels", s.files.steels, 1, 1000);
  visit("ingest", "max_body_bytes", s.ingest.max_body_bytes, 1024, 64 << 20);
  visit("ingest", "max_batch", s.ingest.max_batch, 1, 100'000);
  visit("ingest", "queue_readings", s.ingest.queue_readings, 1, 5'000'000);
  visit("ingest", "future_tolerance_s", s.ingest.future_tolerance_s, 0, 3600);
  visit("ingest", "past_limit_days", s.ingest.past_limit_days, 1, 3650);
  visit("http", "threads", s.http.threads, 2, 256);
  visit("http", "max_connections", s.http.max_connections, 8, 10'000);
  visit("http", "max_connections_per_address", s.http.max_connections_per_address, 8, 10'000);
  visit("http", "max_streams", s.http.max_streams, 1, 5000);
  visit("http", "request_timeout_s", s.http.request_timeout_s, 1, 300);
  visit("http", "idle_timeout_s", s.http.idle_timeout_s, 1, 3600);
  visit("live", "stale_after_s", s.live.stale_after_s, 10, 86'400);
  visit("outlook", "inside_from", s.outlook.inside_from, 0.5, 0.99);
  visit("outlook", "missed_from", s.outlook.missed_from, 0.5, 0.99);
  visit("outlook", "asked_chance", s.outlook.asked_chance, 0.5, 0.99);
  visit("alerts", "chance_drop", s.alerts.chance_drop, 0.05, 0.9);
  visit("alerts", "hold_min", s.alerts.hold_min, 0, 120);
  visit("alerts", "clear_hold_min", s.alerts.clear_hold_min, 0, 240);
  visit("alerts", "cooling_min", s.alerts.cooling_min, 0, 1440);
  visit("alerts", "segment_due_lead_min", s.alerts.segment_due_lead_min, 0, 240);
  visit("alerts", "off_temperature_k", s.alerts.off_temperature_k, 1, 200);
  visit("alerts", "off_carbon_potential_wt_pct", s.alerts.off_carbon_potential_wt_pct, 0.01, 1);
  visit("alerts", "least_free_mb", s.alerts.least_free_mb, 1, 1'000'000);
  visit("log", "level", s.log.level, 1, 10);
  visit("clock", "speed", s.clock.speed, 0.1, 3600);
  visit("clock", "anchor_real", s.clock.anchor_real_us, 0, 40);
  visit("clock", "anchor_data", s.clock.anchor_data_us, 0, 40);
}

void read_option(ConfigTable& table, std::string_view key, std::string& into, int min_length,
                 int max_length) {
  table.text(key, into, static_cast<std::size_t>(min_length), static_cast<std::size_t>(max_length));
}
void read_option(ConfigTable& table, std::string_view key, int& into, int low, int high) {
  std::int64_t value = into;
  if (table.integer(key, value, low, high)) into = static_cast<int>(value);
}
void read_option(ConfigTable& table, std::string_view key, std::size_t& into, int low, int high) {
  std::int64_t value = 0;
  if (table.integer(key, value, low, high)) into = static_cast<std::size_t>(value);
}
void read_option(ConfigTable& table, std::string_view key, double& into, double low, double high) {
  table.number(key, into, low, high);
}
void read_option(ConfigTable& table, std::string_view key, std::optional<std::int64_t>& into, int min_length,
                 int max_length) {
  std::string written, reason;
  if (!table.text(key, written, static_cast<std::size_t>(min_length), static_cast<std::size_t>(max_length)))
    return;
  if (written.empty()) return;
  into = parse_time(written, reason);
  if (!into)
    table.fault(key, "expected an RFC 3339 time such as \"2026-03-02T06:00:00Z\", or \"\": " + reason);
}

std::string toml_text(const std::string& value) {
  return '"' + value + '"';
}
std::string toml_text(int value) {
  return std::to_string(value);
}
std::string toml_text(std::size_t value) {
  return std::to_string(value);
}
std::string toml_text(double value) {
  return number_text(value);
}
std::string toml_text(const std::optional<std::int64_t>& value) {
  return toml_text(value ? format_time(*value) : std::string{});
}

bool is_loopback(const std::string& address, bool& is_address) {
  in_addr four{};
  in6_addr six{};
  if (inet_pton(AF_INET, address.c_str(), &four) == 1) {
    is_address = true;
    return ntohl(four.s_addr) >> 24 == 127;
  }
  is_address = inet_pton(AF_INET6, address.c_str(), &six) == 1;
  return is_address && IN6_IS_ADDR_LOOPBACK(&six);
}

// What no single option can tell.
void check_options(Settings& settings, ConfigTable& listen, ConfigTable& ingest, ConfigTable& log,
                   ConfigTable& clock) {
  bool is_address = false;
  if (!is_loopback(settings.listen.address, is_address)) {
    listen.fault("address",
                 is_address
                     ? "\"" + settings.listen.address +
                           "\" can be reached from other machines, and there is no sign-in and no TLS yet; "
                           "use 127.0.0.1 or ::1"
                     : "\"" + settings.listen.address + "\" is not an IP address; use 127.0.0.1 or ::1");
  }
  if (settings.ingest.queue_readings < settings.ingest.max_batch) {
    ingest.fault("queue_readings", "must be at least max_batch (" +
                                       std::to_string(settings.ingest.max_batch) +
                                       "), or a full batch could never be taken");
  }
  if (!log_level_from(settings.log.level)) {
    log.fault("level",
              "expected \"debug\", \"info\", \"warn\" or \"error\", got \"" + settings.log.level + "\"");
  }
  const Settings::ClockOptions& options = settings.clock;
  if (options.is_scaled() && !(options.anchor_real_us && options.anchor_data_us)) {
    clock.fault("speed",
                "a clock that does not show real time needs both anchor_real and anchor_data, "
                "or data time would jump at each restart");
  }
  settings.clock.where = clock.where("speed");
}

}  // namespace

std::string Settings::path_of(const std::string& file) const {
  if (file.empty() || file.front() == '/' || folder == ".") return file;
  return folder.back() == '/' ? folder + file : folder + "/" + file;
}

Settings read_settings(const std::string& path, ConfigErrors& errors) {
  Settings settings;
  if (const std::size_t slash = path.rfind('/'); slash != std::string::npos) {
    settings.folder = slash == 0 ? "/" : path.substr(0, slash);
  }
  const std::optional<ConfigValue> file = parse_toml_file(path, errors);
  if (!file) return settings;

  ConfigValue absent;
  absent.place = {1, 1};
  ConfigTable root(path, *file, "the file", errors);
  std::deque<std::pair<std::string, ConfigTable>> tables;  // its elements stay where they are
  const auto table = [&](const std::string& name) -> ConfigTable& {
    for (auto& [known, existing] : tables) {
      if (known == name) return existing;
    }
    std::optional<ConfigTable> found = root.table(name);
    tables.emplace_back(name, found ? *found : ConfigTable(path, absent, "[" + name + "]", errors));
    return tables.back().second;
  };
  each_option(settings, [&](const char* name, const char* key, auto& into, auto low, auto high) {
    read_option(table(name), key, into, low, high);
  });
  check_options(settings, table("listen"), table("ingest"), table("log"), table("clock"));
  for (auto& [name, each] : tables) each.finish();
  root.finish();
  return settings;
}

void check_clock_is_allowed(const Settings& settings, const Plant& plant, ConfigErrors& errors) {
  if (!settings.clock.is_scaled()) return;
  const std::string start = settings.clock.where + ": [clock]: ";
  if (!plant.demo) {
    errors.messages.push_back(
        start + "a clock that does not show real time (speed " + number_text(settings.clock.speed) +
        ") is only for a plant file marked demo = true; this one is not, so nobody may take "
        "its values for the state of a real furnace");
  }
  bool is_address = false;
  if (!is_loopback(settings.listen.address, is_address)) {
    errors.messages.push_back(start + "a clock that does not show real time is only for a loopback listener");
  }
}

std::vector<std::pair<std::string, std::string>> list_options(const Settings& settings) {
  std::vector<std::pair<std::string, std::string>> options;
  each_option(settings, [&](const char* table, const char* key, const auto& value, auto, auto) {
    options.emplace_back(std::string(table) + "." + key, toml_text(value));
  });
  return options;
}

}  // namespace hearthfront::server
