// Counters for /metrics in the Prometheus text format 0.0.4. Names are a closed list (the table in
// metrics.cpp): others build alarms on them. All methods may be called from any thread and do not fail.
#pragma once

#include <memory>
#include <string>
#include <string_view>

namespace hearthfront::server {

enum class Total {  // only ever grows
  readings_stored,
  readings_duplicate,
  readings_conflict,
  commits,
  http_requests,
  http_refused_connections,
  http_dropped_streams,
  engine_steps,
  engine_failures,
};

enum class Level {  // goes up and down
  queued_readings,
  wal_bytes,
  store_refuses_writes,  // 1 after a sync of unknown fate
  http_open_connections,
  http_open_streams,
  open_loads,
  stale_loads,
  engine_lag_s,
  clock_speed,
};

class Metrics {
 public:
  Metrics();
  ~Metrics();
  Metrics(const Metrics&) = delete;
  Metrics& operator=(const Metrics&) = delete;

  void add(Total total, double by = 1);
  // For totals that another part counts itself: lifts the counter to `value`, never lowers it.
  void raise_to(Total total, double value);
  void set(Level level, double value);
  void add_refused(std::string_view reason,
                   double by = 1);  // reason: a word of the closed list in ingest/raw_reading.h
  void set_data_age(std::string_view furnace, double age_s);  // furnace: an id of the plant file

  std::string text() const;  // content type text/plain; version=0.0.4

 private:
  class Impl;
  std::unique_ptr<Impl> impl_;
};

}  // namespace hearthfront::server
