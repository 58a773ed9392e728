// Looks at what the engine publishes and at the daemon itself, keeps the open alerts, and stores what
// changes: state and messages in one transaction.
//
// A thread of its own, woken by the engine and each second; it never holds up the engine. What it publishes
// is an immutable list, for any thread. Requests of people come on worker threads and wait for the commit,
// and at most for one look. After a start the open alerts are those of the database, with their numbers and
// ages. Failure: where the store takes no writes, conditions are shown all the same and stored when it takes
// them again.
#pragma once

#include <condition_variable>
#include <cstdint>
#include <functional>
#include <map>
#include <memory>
#include <mutex>
#include <optional>
#include <stdexcept>
#include <string>
#include <thread>
#include <vector>

#include "server/alerts/alert_book.h"
#include "server/alerts/alert_list.h"
#include "server/alerts/daemon_watch.h"
#include "server/alerts/rules.h"
#include "server/base/clock.h"
#include "server/base/plant.h"
#include "server/base/settings.h"
#include "server/live/stored_health.h"
#include "server/live/view.h"
#include "storage/store.h"

namespace hearthfront::server {

struct KeeperParts {
  const Settings& settings;
  const Plant& plant;
  const Clock& clock;
  storage::Store& store;
  const Board& board;
  RouteFunction routes;
  ChannelId channel_id;
  // Whether every open load has a view: before, nothing can be judged.
  std::function<bool()> caught_up;
  // Called after a commit, on the keeper's or a worker's thread; must not block. `messages`: the outbox has
  // new ones.
  std::function<void(std::uint64_t sequence, bool messages)> changed;
};

// There is no alert with this number.
class UnknownAlert : public std::runtime_error {
 public:
  explicit UnknownAlert(std::int64_t id)
      : std::runtime_error("No alert has the number " + std::to_string(id) + ".") {}
};

class AlertKeeper {
 public:
  explicit AlertKeeper(KeeperParts parts);
  ~AlertKeeper();  // stop()
  AlertKeeper(const AlertKeeper&) = delete;
  AlertKeeper& operator=(const AlertKeeper&) = delete;

  void start();
  void stop();  // finishes the look in hand; idempotent
  void wake();  // new views; never blocks for long

  std::shared_ptr<const AlertList> list() const;

  // By a person, durable when they return. Throw UnknownAlert, AlertRefusal, StorageError.
  void acknowledge(std::int64_t id, const std::string& person, const std::string& note);
  void shelve(std::int64_t id, const std::string& person, const std::string& reason, std::int64_t until_us);
  void unshelve(std::int64_t id, const std::string& person);
  void add_note(std::int64_t id, const std::string& person, const std::string& text);

 private:
  using Change = std::function<PersonStep(storage::AlertRow, std::int64_t now_us)>;

  void run();
  void look_once();
  void load_open();
  Findings findings(std::int64_t now_us);
  void judge_slow_things(std::int64_t now_us, std::chrono::steady_clock::time_point steady,
                         const LoadViews& views);
  void change(std::int64_t id, const Change& change);
  // With state_mutex_ held.
  void publish(bool stored);

  const KeeperParts parts_;
  const BookParts book_;

  std::mutex state_mutex_;  // guards what follows, and keeps looks and people's changes apart
  std::unique_ptr<storage::Reader> reader_;
  std::optional<std::vector<storage::AlertRow>> open_;  // empty: to be read from the database
  std::int64_t next_id_ = 1;
  std::map<std::int64_t, std::string> load_names_;
  DaemonWatch watch_;
  std::string store_trouble_;
  Findings slow_;  // of the last slow look
  std::optional<std::chrono::steady_clock::time_point> slow_at_;
  std::uint64_t sequence_ = 0;

  mutable std::mutex list_mutex_;
  std::shared_ptr<const AlertList> list_ = std::make_shared<const AlertList>();

  std::mutex wake_mutex_;
  std::condition_variable woken_;
  bool views_wait_ = false, stopping_ = false;
  std::thread thread_;
};

}  // namespace hearthfront::server
