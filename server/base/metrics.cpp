#include "server/base/metrics.h"

#include <prometheus/counter.h>
#include <prometheus/gauge.h>
#include <prometheus/registry.h>
#include <prometheus/text_serializer.h>

#include <map>
#include <mutex>
#include <sstream>

namespace hearthfront::server {
namespace {

template <typename Key>
struct Named {
  Key key;
  const char* name;
  const char* help;
};

constexpr Named<Total> totals[] = {
    {Total::readings_stored, "hearthfront_readings_stored_total", "Readings committed as new rows."},
    {Total::readings_duplicate, "hearthfront_readings_duplicate_total", "Readings that were stored already."},
    {Total::readings_conflict, "hearthfront_readings_conflict_total",
     "Readings with another value than the one stored for the same channel and time."},
    {Total::commits, "hearthfront_commits_total", "Synced commits of the writer."},
    {Total::http_requests, "hearthfront_http_requests_total", "Requests answered."},
    {Total::http_refused_connections, "hearthfront_http_refused_connections_total",
     "Connections refused by a connection limit."},
    {Total::http_dropped_streams, "hearthfront_http_dropped_streams_total",
     "Live streams dropped because the client did not keep up."},
    {Total::engine_steps, "hearthfront_engine_steps_total", "Lattice steps of the diffusion model."},
    {Total::engine_failures, "hearthfront_engine_failures_total", "Items whose calculation failed."},
};

constexpr Named<Level> levels[] = {
    {Level::queued_readings, "hearthfront_queued_readings", "Readings that wait for the writer."},
    {Level::wal_bytes, "hearthfront_wal_bytes", "Size of the write-ahead log."},
    {Level::store_refuses_writes, "hearthfront_store_refuses_writes",
     "1 after a sync of unknown fate: restart the daemon."},
    {Level::http_open_connections, "hearthfront_http_open_connections", "Open connections."},
    {Level::http_open_streams, "hearthfront_http_open_streams", "Open live streams."},
    {Level::open_loads, "hearthfront_open_loads", "Loads in a furnace."},
    {Level::stale_loads, "hearthfront_stale_loads", "Open loads without recent readings."},
    {Level::engine_lag_s, "hearthfront_engine_lag_seconds",
     "Age of the oldest committed reading not yet in the model."},
    {Level::clock_speed, "hearthfront_clock_speed", "1 in real use; another value only in the demo."},
};

}  // namespace

class Metrics::Impl {
 public:
  Impl() {
    for (const auto& each : totals) {
      totals_[each.key] =
          &prometheus::BuildCounter().Name(each.name).Help(each.help).Register(registry_).Add({});
    }
    for (const auto& each : levels) {
      levels_[each.key] =
          &prometheus::BuildGauge().Name(each.name).Help(each.help).Register(registry_).Add({});
    }
  }

  prometheus::Registry registry_;
  std::map<Total, prometheus::Counter*> totals_;
  std::map<Level, prometheus::Gauge*> levels_;
  prometheus::Family<prometheus::Counter>& refused_ = prometheus::BuildCounter()
                                                          .Name("hearthfront_readings_refused_total")
                                                          .Help("Readings refused, by reason.")
                                                          .Register(registry_);
  prometheus::Family<prometheus::Gauge>& data_age_ = prometheus::BuildGauge()
                                                         .Name("hearthfront_data_age_seconds")
                                                         .Help("Age of the newest reading of a furnace.")
                                                         .Register(registry_);
  std::mutex raising_;  // two raises of one counter must not both add the difference
};

Metrics::Metrics() : impl_(std::make_unique<Impl>()) {}
Metrics::~Metrics() = default;

void Metrics::add(Total total, double by) {
  impl_->totals_.at(total)->Increment(by);
}

void Metrics::raise_to(Total total, double value) {
  prometheus::Counter& counter = *impl_->totals_.at(total);
  const std::lock_guard lock(impl_->raising_);
  if (const double now = counter.Value(); value > now) counter.Increment(value - now);
}

void Metrics::set(Level level, double value) {
  impl_->levels_.at(level)->Set(value);
}

void Metrics::add_refused(std::string_view reason, double by) {
  impl_->refused_.Add({{"reason", std::string(reason)}}).Increment(by);
}

void Metrics::set_data_age(std::string_view furnace, double age_s) {
  impl_->data_age_.Add({{"furnace", std::string(furnace)}}).Set(age_s);
}

std::string Metrics::text() const {
  std::ostringstream out;
  out.imbue(std::locale::classic());
  prometheus::TextSerializer().Serialize(out, impl_->registry_.Collect());
  return out.str();
}

}  // namespace hearthfront::server
