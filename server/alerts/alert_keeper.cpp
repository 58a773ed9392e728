#include "server/alerts/alert_keeper.h"

#include <algorithm>
#include <tuple>

#include "server/alerts/alert_json.h"
#include "server/base/log.h"

namespace hearthfront::server {
namespace {

using storage::AlertRow;
using storage::AlertState;

constexpr auto shortest_pause = std::chrono::milliseconds(200);
constexpr auto longest_pause = std::chrono::milliseconds(1000);
// Channels, disk and stuck messages are read from disk.
constexpr auto slow_pause = std::chrono::seconds(20);

// Of equal ones a miss that can still be saved comes first: it is the one that waits for a decision.
bool more_pressing(const AlertRow& a, const AlertRow& b) {
  const auto rank = [](const AlertRow& row) {
    return std::tuple(row.shelved_until_us.has_value(), -static_cast<int>(severity_from(row.severity)),
                      row.acknowledged_us.has_value(), row.kind != "projected miss", -row.id);
  };
  return rank(a) < rank(b);
}

}  // namespace

AlertKeeper::AlertKeeper(KeeperParts parts)
    : parts_(std::move(parts)),
      book_{parts_.routes,
            [this](const AlertRow& row, std::string_view event, std::string_view key, std::int64_t at_us) {
              const AlertNames names{parts_.plant, [this](std::int64_t load) -> std::optional<std::string> {
                                       const auto found = load_names_.find(load);
                                       return found == load_names_.end() ? std::nullopt
                                                                         : std::optional(found->second);
                                     }};
              return alert_payload(row, event, key, at_us, names);
            },
            static_cast<std::int64_t>(parts_.settings.alerts.cooling_min * 60e6)},
      watch_(parts_.clock, parts_.store.path()) {}

AlertKeeper::~AlertKeeper() {
  stop();
}

void AlertKeeper::start() {
  try {
    const std::scoped_lock lock(state_mutex_);
    load_open();
    publish(false);
  } catch (const storage::StorageError& error) {
    log_error("the open alerts could not be read yet", {{"what", error.what()}});
  }
  thread_ = std::thread([this] { run(); });
}

void AlertKeeper::stop() {
  {
    const std::scoped_lock lock(wake_mutex_);
    stopping_ = true;
  }
  woken_.notify_all();
  if (thread_.joinable()) thread_.join();
}

void AlertKeeper::wake() {
  {
    const std::scoped_lock lock(wake_mutex_);
    views_wait_ = true;
  }
  woken_.notify_all();
}

void AlertKeeper::run() {
  while (true) {
    {
      std::unique_lock lock(wake_mutex_);
      woken_.wait_for(lock, shortest_pause, [this] { return stopping_; });
      woken_.wait_for(lock, longest_pause - shortest_pause, [this] { return stopping_ || views_wait_; });
      views_wait_ = false;
      if (stopping_) return;
    }
    try {
      look_once();
    } catch (const std::exception& error) {
      // The alerts keep their last state; the next look starts again from the database.
      log_error("a look for alerts failed", {{"what", error.what()}});
      const std::scoped_lock lock(state_mutex_);
      reader_.reset();
      open_.reset();
    }
  }
}

void AlertKeeper::load_open() {
  if (!reader_) reader_ = std::make_unique<storage::Reader>(parts_.store.path());
  if (open_) return;
  open_ = reader_->open_alerts();
  next_id_ = reader_->next_alert_id();
}

void AlertKeeper::judge_slow_things(std::int64_t now_us, std::chrono::steady_clock::time_point steady,
                                    const LoadViews& views) {
  if (slow_at_ && steady - *slow_at_ < slow_pause && store_trouble_.empty()) return;
  slow_at_ = steady;
  slow_ = judge_daemon(watch_.look(*reader_, now_us, steady, store_trouble_), parts_.settings.alerts);
  for (const Furnace& furnace : parts_.plant.furnaces) {
    std::vector<NamedHealth> channels;
    // Without a load nobody minds what a cold furnace reads.
    const bool used = std::any_of(views.begin(), views.end(), [&](const auto& view) {
      return view->row.furnace == furnace.id && view->condition == Condition::live;
    });
    if (used)
      for (const Channel& channel : furnace.channels)
        channels.push_back(
            {channel.name, stored_health(furnace, channel, parts_.channel_id, *reader_, now_us)});
    slow_.add(judge_channels(furnace, channels, parts_.settings.alerts, now_us));
  }
}

Findings AlertKeeper::findings(std::int64_t now_us) {
  const auto steady = std::chrono::steady_clock::now();
  const LoadViews views = parts_.board.loads();
  if (watch_.compare_clocks(now_us, steady)) slow_at_.reset();
  judge_slow_things(now_us, steady, views);
  Findings all = slow_;
  for (const Furnace& furnace : parts_.plant.furnaces)
    all.add(judge_furnace(furnace, views, parts_.settings.alerts, now_us));
  for (const auto& view : views) {
    load_names_[view->row.id] = view->row.name;
    all.add(judge_outlook(*view, parts_.settings.alerts,
                          {parts_.settings.outlook.inside_from, parts_.settings.outlook.missed_from}));
    all.add(judge_recipe(*view, parts_.settings.alerts));
    all.add(judge_model(*view, parts_.settings.alerts));
  }
  for (const AlertRow& row : *open_) {
    if (!row.furnace.empty() && !parts_.plant.furnace(row.furnace)) all.gone_furnaces.insert(row.furnace);
    if (row.load == 0 || all.gone_loads.contains(row.load)) continue;
    const bool on_board =
        std::any_of(views.begin(), views.end(), [&](const auto& view) { return view->row.id == row.load; });
    if (on_board && load_names_.contains(row.load)) continue;
    const auto load = reader_->load(row.load);
    if (load) load_names_[row.load] = load->name;
    if (!on_board && (!load || load->ended_us)) all.gone_loads.insert(row.load);
  }
  return all;
}

void AlertKeeper::look_once() {
  if (!parts_.caught_up()) return;
  bool stored = false, messages = false;
  std::uint64_t sequence = 0;
  {
    const std::scoped_lock lock(state_mutex_);
    load_open();
    const std::int64_t now_us = parts_.clock.now_us();
    const Findings found = findings(now_us);
    BookStep step = look(book_, *open_, next_id_, found, now_us);
    messages = !step.write.outbox.empty();
    stored = !step.write.empty();
    try {
      parts_.store.save_alerts(std::move(step.write));
      store_trouble_.clear();
    } catch (const storage::StorageError& error) {
      if (error.fault == storage::StorageFault::closing) return;
      if (store_trouble_.empty()) log_error("alerts could not be stored", {{"what", error.what()}});
      store_trouble_ = error.what();
      // Shown, though not stored: people must see what is. The next look tries again from what is stored.
      open_ = std::move(step.open);
      publish(false);
      open_.reset();
      return;
    }
    open_ = std::move(step.open);
    next_id_ = step.next_id;
    publish(stored);
    sequence = sequence_;
  }
  if (stored && parts_.changed) parts_.changed(sequence, messages);
}

void AlertKeeper::publish(bool stored) {
  if (stored) ++sequence_;
  auto list = std::make_shared<AlertList>();
  list->sequence = sequence_;
  for (const AlertRow& row : *open_)
    if (row.state == AlertState::active) list->active.push_back(row);
  std::sort(list->active.begin(), list->active.end(), more_pressing);
  const std::scoped_lock lock(list_mutex_);
  list_ = std::move(list);
}

std::shared_ptr<const AlertList> AlertKeeper::list() const {
  const std::scoped_lock lock(list_mutex_);
  return list_;
}

void AlertKeeper::change(std::int64_t id, const Change& change) {
  bool messages = false;
  std::uint64_t sequence = 0;
  {
    const std::scoped_lock lock(state_mutex_);
    load_open();
    const auto found =
        std::find_if(open_->begin(), open_->end(), [&](const AlertRow& row) { return row.id == id; });
    const bool open = found != open_->end();
    const auto row = open ? std::optional(*found) : reader_->alert(id);
    if (!row || row->state == AlertState::waiting) throw UnknownAlert(id);
    PersonStep step = change(*row, parts_.clock.now_us());
    if (step.write.empty()) return;
    messages = !step.write.outbox.empty();
    parts_.store.save_alerts(std::move(step.write));
    if (open) *found = std::move(step.row);
    publish(true);
    sequence = sequence_;
  }
  if (parts_.changed) parts_.changed(sequence, messages);
}

void AlertKeeper::acknowledge(std::int64_t id, const std::string& person, const std::string& note) {
  change(id, [&](AlertRow row, std::int64_t now_us) {
    return server::acknowledge(std::move(row), person, note, now_us);
  });
}

void AlertKeeper::shelve(std::int64_t id, const std::string& person, const std::string& reason,
                         std::int64_t until_us) {
  change(id, [&](AlertRow row, std::int64_t now_us) {
    return server::shelve(std::move(row), person, reason, until_us, now_us);
  });
}

void AlertKeeper::unshelve(std::int64_t id, const std::string& person) {
  change(id, [&](AlertRow row, std::int64_t now_us) {
    return server::unshelve(book_, std::move(row), person, now_us);
  });
}

void AlertKeeper::add_note(std::int64_t id, const std::string& person, const std::string& text) {
  change(id, [&](AlertRow row, std::int64_t now_us) {
    return server::note(std::move(row), person, text, now_us);
  });
}

}  // namespace hearthfront::server
