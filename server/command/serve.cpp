// The daemon's life: a flat list of starts, each with its reason, and the reverse on the way out.
#include <atomic>
#include <cstdio>

#include "server/alerts/alert_keeper.h"
#include "server/api/api.h"
#include "server/base/json_fields.h"
#include "server/base/log.h"
#include "server/base/notify.h"
#include "server/base/version.h"
#include "server/command/commands.h"
#include "server/command/signals.h"
#include "server/delivery/dispatcher.h"
#include "server/delivery/routing.h"
#include "server/live/engine.h"

namespace hearthfront::server {
namespace {

HttpLimits limits_from(const Settings& settings) {
  HttpLimits limits;
  limits.threads = settings.http.threads;
  limits.max_connections = settings.http.max_connections;
  limits.max_connections_per_address = settings.http.max_connections_per_address;
  limits.max_streams = settings.http.max_streams;
  limits.max_body_bytes = settings.ingest.max_body_bytes;
  limits.request_timeout_s = settings.http.request_timeout_s;
  limits.idle_timeout_s = settings.http.idle_timeout_s;
  return limits;
}

// Sends what the engine published to every open dashboard.
void broadcast(HttpServer& http, const Api& api, const Board& board, const std::vector<std::int64_t>& loads) {
  if (http.counters().open_streams == 0) return;
  const std::uint64_t sequence = board.sequence();
  http.publish("floor", api.floor(), sequence);
  for (const std::int64_t id : loads) {
    const auto view = board.load(id);
    const Json data{{"id", id}, {"sequence", view ? view->sequence : sequence}};
    http.publish("load", data.dump(), sequence);
  }
}

int serve(const Settings& settings, const Plant& plant) {
  const StopSignals signals;
  const ServiceNotifier notifier;
  const auto clock = make_clock(settings);
  Metrics metrics;

  // Storage before all that reads it: it takes the lock against a second daemon and migrates.
  storage::StoreOptions options;
  options.path = settings.path_of(settings.files.database);
  options.queue_readings = settings.ingest.queue_readings;
  storage::Store store(options);
  const Acceptor acceptor(plant, *clock, store, settings.ingest);

  Board board;
  std::atomic<ServiceState> state{ServiceState::starting};
  HttpServer http(limits_from(settings));
  Engine* running = nullptr;
  const AlertKeeper* keeping = nullptr;
  const auto tell_alerts = [&http, &board](std::uint64_t sequence) {
    http.publish("alerts", Json{{"sequence", sequence}}.dump(), board.sequence());
  };
  Dispatcher dispatcher(settings.targets, store, *clock, [&] { tell_alerts(keeping->list()->sequence); });
  AlertKeeper alerts({settings, plant, *clock, store, board,
                      [&settings](const storage::AlertRow& alert, std::string_view) {
                        return routes_of(settings.targets, alert);
                      },
                      [&](const std::string& furnace, const std::string& channel) {
                        return acceptor.channel_id(furnace, channel).value_or(-1);
                      },
                      [&running] { return running && running->caught_up(); },
                      [&](std::uint64_t sequence, bool messages) {
                        if (messages) dispatcher.wake();
                        tell_alerts(sequence);
                      }});
  keeping = &alerts;
  Api api({settings, plant, *clock, store, board, acceptor, metrics, http, dispatcher, state,
           [&running] {
             if (running) running->loads_changed();
           },
           alerts});
  Engine engine({plant,
                 *clock,
                 store,
                 board,
                 metrics,
                 settings.live.stale_after_s,
                 {settings.outlook.inside_from, settings.outlook.missed_from},
                 [&](const std::string& furnace, const std::string& channel) {
                   return acceptor.channel_id(furnace, channel).value_or(-1);
                 },
                 [&](const std::vector<std::int64_t>& loads) {
                   alerts.wake();
                   broadcast(http, api, board, loads);
                 }});
  running = &engine;
  store.on_change([&engine] { engine.wake(); });

  // The port early, so that a taken one is known before work starts and readings are taken at once; ready
  // only when every open load has caught up.
  api.add_routes();
  http.on_error([](std::string_view what) { log_error("request failed", {{"what", what}}); });
  const int port = http.start(settings.listen.address, settings.listen.port);
  engine.start();
  dispatcher.start();  // what an earlier run left unsent goes out; before those who wake it
  alerts.start();      // after the engine: it judges nothing before every open load has a view
  log_info("hearthfront serves", {{"version", version},
                                  {"address", settings.listen.address},
                                  {"port", port},
                                  {"database", options.path},
                                  {"plant", plant.name},
                                  {"clock_speed", clock->speed()}});

  std::uint64_t rounds_seen = 0;
  const auto pause =
      notifier.watchdog_interval()
          ? std::chrono::duration_cast<std::chrono::milliseconds>(*notifier.watchdog_interval())
          : std::chrono::milliseconds(1000);
  const auto tick = std::min(pause, std::chrono::milliseconds(1000));
  int exit_code = exit_done;
  while (!signals.wait_for(tick)) {
    if (state == ServiceState::starting && engine.caught_up()) {
      state = ServiceState::ready;
      notifier.ready("serving");
      log_info("ready");
    }
    // A writer in doubt ends the process: only a fresh start reads what is really on the disk.
    if (store.counters().poisoned) {
      log_error("a sync to disk failed; stopping, so that a restart reads what was really stored");
      exit_code = exit_failed;
      break;
    }
    const std::uint64_t rounds = engine.rounds();
    if (rounds != rounds_seen) notifier.watchdog();
    rounds_seen = rounds;
  }

  state = ServiceState::stopping;
  notifier.stopping("stopping");
  log_info("stopping");
  dispatcher.stop();  // before http: a request may be a test under way. What is unsent stays in the outbox
  http.stop();        // no new work; running requests get their answer
  alerts.stop();      // before engine and store: it looks at the one and writes to the other
  engine.stop();      // before the store: it reads and saves results
  store.close();      // last: stores what is queued, checkpoints
  log_info("stopped");
  flush_log();
  return exit_code;
}

}  // namespace

int run_serve(const std::string& settings_path) {
  ConfigErrors errors;
  const Settings settings = read_settings(settings_path, errors);
  const Plant plant =
      read_plant(settings.path_of(settings.files.plant), settings.path_of(settings.files.steels), errors);
  if (errors.ok()) check_clock_is_allowed(settings, plant, errors);
  if (errors.ok()) check_targets(settings.targets, plant, alert_kinds(), errors);
  if (!errors.ok()) {
    for (const std::string& message : errors.messages) std::fprintf(stderr, "%s\n", message.c_str());
    return exit_bad_input;
  }
  set_log_level(log_level_from(settings.log.level).value_or(LogLevel::info));
  try {
    return serve(settings, plant);
  } catch (const std::exception& error) {
    log_error("hearthfront cannot go on", {{"what", error.what()}});
    flush_log();
    return exit_failed;
  }
}

}  // namespace hearthfront::server
