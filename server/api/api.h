// The routes of /api/v1 and their handlers. Handlers run on many threads at once: everything they reach
// is thread-safe. Each answers from published views or short read transactions, never from the engine.
#pragma once

#include <atomic>
#include <cstdint>
#include <functional>
#include <map>
#include <memory>
#include <mutex>
#include <semaphore>
#include <string>
#include <tuple>
#include <utility>

#include "server/alerts/alert_keeper.h"
#include "server/api/documents.h"
#include "server/api/http_server.h"
#include "server/api/reader_pool.h"
#include "server/base/clock.h"
#include "server/base/metrics.h"
#include "server/base/plant.h"
#include "server/base/settings.h"
#include "server/ingest/accept.h"
#include "server/live/view.h"
#include "storage/store.h"

namespace hearthfront::server {

enum class ServiceState { starting, ready, stopping };

struct ApiParts {
  const Settings& settings;
  const Plant& plant;
  const Clock& clock;
  storage::Store& store;
  const Board& board;
  const Acceptor& acceptor;
  Metrics& metrics;
  HttpServer& http;
  const std::atomic<ServiceState>& state;
  std::function<void()> loads_changed;
  AlertKeeper& alerts;
};

class Api {
 public:
  explicit Api(ApiParts parts);
  // Adds every route, the event stream and the dashboard's files to the server.
  void add_routes();
  std::string floor() const;
  // Brings counters that other parts keep into the metrics.
  void update_metrics() const;

 private:
  void add_system_routes();
  void add_reading_routes();
  void add_csv_routes();
  void add_load_routes();
  void add_view_routes();
  void add_furnace_routes();
  void add_channel_routes();
  void add_library_routes();
  void add_outlook_routes();
  void add_alert_routes();

  Response status(const Request& request) const;
  Response ready(const Request& request) const;
  Response take_readings(const Request& request);
  Response take_log(const Request& request);
  Response guess_log(const Request& request);
  Response preview_log(const Request& request);
  Response list_mappings(const Request& request);
  Response save_mapping(const Request& request);
  Response create_load(const Request& request);
  Response list_loads(const Request& request);
  Response show_load(const Request& request);
  Response add_note(const Request& request);
  Response end_load(const Request& request);
  Response correct_load(const Request& request);
  Response move_load(const Request& request);
  Response cancel_load(const Request& request);
  Response revisions(const Request& request);
  Response recent_loads(const Request& request);
  Response push(const Request& request);
  Response snapshot(const Request& request);
  Response result(const Request& request);
  Response history(const Request& request);
  Response furnaces(const Request& request);
  Response furnace(const Request& request);
  Response readings(const Request& request);
  Response conflicts(const Request& request);
  Response choose(const Request& request);
  Response masks(const Request& request);
  Response add_mask(const Request& request);
  Response withdraw_mask(const Request& request);
  Response refused(const Request& request);
  Response trial(const Request& request);
  Response proposal(const Request& request);
  Response adopt_plan(const Request& request);
  Response library(const Request& request);
  Response library_item(const Request& request);
  Response save_library(const Request& request);
  Response list_alerts(const Request& request);
  Response show_alert(const Request& request);
  Response acknowledge_alert(const Request& request);
  Response shelve_alert(const Request& request);
  Response unshelve_alert(const Request& request);
  Response add_alert_note(const Request& request);

  struct FoundLoad {
    storage::LoadRow row;
    std::shared_ptr<const LoadDefinition> definition;
  };
  struct FoundChannel {
    const Furnace& furnace;
    const Channel& channel;
    std::int64_t id;
  };
  FoundLoad find_load(const Request& request);
  std::optional<FoundLoad> load_of(std::int64_t id, storage::Reader& reader) const;
  const Furnace& find_furnace(const Request& request) const;
  FoundChannel find_channel(const Furnace& furnace, const std::string& name) const;
  void check_times(const LoadDefinition& load) const;
  // The body with each "rework_of" replaced by the final profile of the item it names.
  std::string with_rework(const std::string& body);
  void refuse_ended(const FoundLoad& found) const;
  // The alert with its events and messages, as it is now.
  Response alert_document(std::int64_t id);
  // Stores `load` as the next revision and answers with it.
  Response changed(const FoundLoad& found, const LoadDefinition& load, storage::AuditRow audit,
                   bool cancelled = false);
  // The one that ?mapping= names, or the only one that the furnace knows.
  CsvMapping mapping_of(const Request& request, const Furnace& furnace);
  FurnaceState state_of(const Furnace& furnace);
  ChannelHealth health_of(const Furnace& furnace, const Channel& channel, storage::Reader& reader) const;
  // The view of an open load as published; of an ended load derived again from its readings.
  std::shared_ptr<const LoadView> view_of(const FoundLoad& found);
  // The stored result of an ended load's present revision, or the same worked out now.
  std::string final_result(const FoundLoad& found, storage::Reader& reader);
  std::shared_ptr<LoadView> derive_view(const FoundLoad& found, storage::Reader& reader);

  // The newest view of an open load with an outlook in it, else Problem 409 that says why there is none.
  std::shared_ptr<const LoadView> view_with_outlook(const FoundLoad& found);
  solver::StandingLimits standing_limits() const;
  template <typename Compute>
  auto one_of_few(Compute compute);

  ApiParts parts_;
  std::counting_semaphore<> trial_seats_{2};
  ReaderPool readers_;
  std::mutex past_mutex_;
  // By load, its revision, and age of the stored result.
  std::map<std::tuple<std::int64_t, std::int64_t, std::int64_t>, std::shared_ptr<const LoadView>> past_views_;
};

}  // namespace hearthfront::server
