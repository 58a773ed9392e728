// Follows committed readings and keeps every open load's run at "now"; publishes views to the board, and
// stores the final result of each load that ended, with a new revision when a late reading changes it.
//
// One thread of its own; it is never waited for by a worker, and never waits on a socket. Running state is
// not stored: after a restart the same code derives every open load from its readings.
#pragma once

#include <atomic>
#include <chrono>
#include <condition_variable>
#include <cstdint>
#include <functional>
#include <map>
#include <memory>
#include <mutex>
#include <set>
#include <string>
#include <thread>
#include <vector>

#include "server/base/clock.h"
#include "server/base/metrics.h"
#include "server/base/plant.h"
#include "server/live/derive.h"
#include "server/live/view.h"
#include "storage/store.h"

namespace hearthfront::server {

// Reads accepted readings and marks of a load's channels through `reader`.
ReadingSource stored_readings(
    storage::Reader& reader,
    const std::function<std::int64_t(const std::string& furnace, const std::string& channel)>& channel_id);

struct EngineParts {
  const Plant& plant;
  const Clock& clock;
  storage::Store& store;
  Board& board;
  Metrics& metrics;
  double stale_after_s = 300;
  solver::StandingLimits standing;
  // Store id of a plant channel.
  std::function<std::int64_t(const std::string& furnace, const std::string& channel)> channel_id;
  // Called on the engine's thread with the loads whose view is new, or with none every few seconds.
  std::function<void(const std::vector<std::int64_t>& loads)> published;
};

class Engine {
 public:
  explicit Engine(EngineParts parts);
  ~Engine();  // stop()
  Engine(const Engine&) = delete;
  Engine& operator=(const Engine&) = delete;

  void start();
  void stop();           // finishes the load in hand; idempotent
  void wake();           // new readings were committed
  void loads_changed();  // a load was created, ended or noted
  // True once every load that was open at the start has a view.
  bool caught_up() const { return caught_up_; }
  // Rounds of the loop so far: the watchdog's sign of progress.
  std::uint64_t rounds() const { return rounds_; }

 private:
  struct Tracked {
    storage::LoadRow row;
    std::shared_ptr<const LoadDefinition> definition;
    std::unique_ptr<LiveLoad> load;
    std::vector<std::int64_t> channels;  // store ids, as load->channels().used()
    bool touched = true;
    std::int64_t view_us = 0;
    double offered_joint_chance = -1;  // worked out once the members are there
    std::int64_t outlook_interval = -1;
    std::shared_ptr<const LoadView> outlook_view;  // the newest with an outlook
  };

  void run();
  void round(storage::Reader& reader);
  void reconcile(storage::Reader& reader);
  void apply_changes(storage::Reader& reader);
  void follow_pushes(storage::Reader& reader);
  void refresh_views(storage::Reader& reader);
  void bring_members_up(storage::Reader& reader);
  void add_outlook_to(LoadView& view, Tracked& tracked);
  void refresh(Tracked& tracked, storage::Reader& reader, std::int64_t now_us);
  void finish(storage::Reader& reader, const storage::LoadRow& row);
  void look_again(storage::Reader& reader);
  void note_newest(const storage::ChangedSpan& span, storage::Reader& reader);
  ReadingSource source(storage::Reader& reader) const { return stored_readings(reader, parts_.channel_id); }

  EngineParts parts_;
  std::map<std::int64_t, std::string> furnace_of_channel_;
  std::map<std::string, std::int64_t> reach_us_;  // how far a reading of each furnace can speak
  std::map<std::int64_t, Tracked> tracked_;
  std::vector<storage::ChangedSpan> pending_;
  std::set<std::int64_t> unfinished_;  // ended loads whose result could not be stored
  // Ended loads to be looked at once more since the start, the newest last.
  std::vector<std::int64_t> doubted_;
  bool doubts_listed_ = false;
  std::map<std::string, const Channel*> push_channels_;  // of lines, by furnace
  bool pushes_may_wait_ = true;
  bool members_behind_ = false;
  std::vector<std::int64_t> fresh_views_;
  std::chrono::steady_clock::time_point published_at_{};

  std::thread thread_;
  std::mutex mutex_;
  std::condition_variable condition_;
  bool work_waits_ = false, stopping_ = false;
  std::atomic<bool> loads_dirty_{true}, caught_up_{false};
  std::atomic<std::uint64_t> rounds_{0};
};

}  // namespace hearthfront::server
