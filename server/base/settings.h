// The daemon's settings: every option with unit, default and reason. Read once at start from one TOML
// file (config/hearthfront.toml shows all of them), plain data afterwards. The reader is strict: exact
// types, ranges, no unknown keys, and all mistakes of the file reported at once.
#pragma once

#include <cstddef>
#include <cstdint>
#include <optional>
#include <string>
#include <utility>
#include <vector>

#include "server/base/plant.h"

namespace hearthfront::server {

struct Settings {
  struct Listen {
    std::string address = "127.0.0.1";  // loopback only: there is no sign-in and no TLS yet
    int port = 8473;                    // 0 takes any free port
  } listen;

  struct Files {  // as written; see Settings::path_of
    std::string database = "hearthfront.db";
    std::string plant = "plant.toml";
    std::string steels = "steels.toml";
  } files;

  struct Ingest {
    std::size_t max_body_bytes = 8'388'608;  // half a year of minute values of one channel as CSV fits
    std::size_t max_batch = 10'000;          // readings in one JSON body, and in one commit
    std::size_t queue_readings = 50'000;     // waiting for the disk; above it senders are told to wait
    double future_tolerance_s = 120;         // how far a logger's clock may run ahead of ours
    double past_limit_days = 400;            // older is taken for a wrong year
  } ingest;

  struct Http {
    int threads = 16;                       // workers; live streams hold none
    int max_connections = 1024;             // above it: 503
    int max_connections_per_address = 256;  // one machine cannot take them all
    int max_streams = 256;                  // open live streams; above it pages poll
    int request_timeout_s = 15;             // for a whole request, against slow senders
    int idle_timeout_s = 60;                // between requests of one connection
  } http;

  struct Live {
    double stale_after_s = 300;  // on the clock: no reading for so long shows "stale"
  } live;

  struct Outlook {
    double inside_from = 0.8;   // chance from which an item stands "inside"
    double missed_from = 0.5;   // chance of one side from which it stands "shallow" or "deep"
    double asked_chance = 0.9;  // that a proposal has to reach for all windows of a load together
  } outlook;

  struct Alerts {
    double chance_drop = 0.25;   // joint chance this far below what the recipe offered is a projected miss
    double hold_min = 5;         // data time: a condition lasts so long before it is told
    double clear_hold_min = 10;  // data time: it has been gone for so long before its alert is past
    double cooling_min = 60;     // clock: one that comes back within it is the same alert
    double segment_due_lead_min = 10;           // a segment's end is told so long before
    double off_temperature_k = 10;              // steady part of shown minus set; common practice, no source
    double off_carbon_potential_wt_pct = 0.08;  // likewise
    double least_free_mb = 500;                 // on the database's disk; months of readings of a plant
  } alerts;

  struct Log {
    std::string level = "info";  // debug, info, warn, error
  } log;

  // Data time = anchor_data + speed x (real time - anchor_real).
  struct ClockOptions {
    double speed = 1.0;
    std::optional<std::int64_t> anchor_real_us, anchor_data_us;
    std::string where;  // file:line:column of [clock], for later messages
    bool is_scaled() const { return speed != 1.0 || anchor_real_us || anchor_data_us; }
  } clock;

  std::string folder = ".";                            // of the settings file
  std::string path_of(const std::string& file) const;  // relative names start at `folder`
};

// Reads the file; options that it leaves out keep their defaults. On errors the result must not be used.
Settings read_settings(const std::string& path, ConfigErrors& errors);

// A clock that does not show real time is allowed only for a plant file marked demo = true and a
// loopback listener: nobody may take accelerated values for the state of a real furnace.
void check_clock_is_allowed(const Settings& settings, const Plant& plant, ConfigErrors& errors);

// Every option as "table.key" with its value in TOML text, in the order of the shipped file.
std::vector<std::pair<std::string, std::string>> list_options(const Settings& settings);

}  // namespace hearthfront::server
