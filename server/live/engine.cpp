#include "server/live/engine.h"

#include <algorithm>
#include <chrono>
#include <cmath>
#include <limits>
#include <utility>

#include "server/base/log.h"
#include "server/base/time_text.h"
#include "server/live/definition_json.h"
#include "server/live/push_line.h"
#include "server/live/result_json.h"

namespace hearthfront::server {
namespace {

// Bursts of commits are taken together; without any, views are refreshed so that time moves on them.
constexpr auto shortest_round = std::chrono::milliseconds(200);
constexpr auto longest_round = std::chrono::milliseconds(1000);
// Followers hear from us so often even when nothing is new, so that silence means trouble.
constexpr auto longest_silence = std::chrono::seconds(4);
constexpr std::int64_t view_refresh_us = 10'000'000;  // of data time

}  // namespace

ReadingSource stored_readings(
    storage::Reader& reader,
    const std::function<std::int64_t(const std::string& furnace, const std::string& channel)>& channel_id) {
  ReadingSource source;
  source.readings = [&reader, channel_id](const LoadChannels::Used& used, std::int64_t from_us,
                                          std::int64_t to_us) {
    std::vector<Sample> samples;
    for (const storage::Reading& reading :
         reader.accepted(channel_id(used.furnace, used.name), from_us, to_us))
      samples.push_back({reading.time_us, reading.value});
    return samples;
  };
  source.marks = [&reader, channel_id](const LoadChannels::Used& used, std::int64_t from_us,
                                       std::int64_t to_us) {
    std::vector<TimeSpan> marks;
    for (const storage::MaskRow& mask : reader.masks(channel_id(used.furnace, used.name), from_us, to_us))
      if (!mask.withdrawn) marks.push_back({mask.from_us, mask.to_us});
    return marks;
  };
  return source;
}

Engine::Engine(EngineParts parts) : parts_(std::move(parts)) {
  for (const Furnace& furnace : parts_.plant.furnaces) {
    std::int64_t& reach_us = reach_us_[furnace.id];
    for (const Channel& channel : furnace.channels) {
      const double reach_s = std::max(channel.gap_limit_s, channel.hold_limit_s);
      reach_us = std::max<std::int64_t>(reach_us, std::llround(reach_s * 1e6));
      furnace_of_channel_[parts_.channel_id(furnace.id, channel.name)] = furnace.id;
      if (furnace.line && channel.role == Role::push) push_channels_[furnace.id] = &channel;
    }
  }
}

Engine::~Engine() {
  stop();
}

void Engine::start() {
  thread_ = std::thread([this] { run(); });
}

void Engine::stop() {
  {
    const std::scoped_lock lock(mutex_);
    stopping_ = true;
  }
  condition_.notify_all();
  if (thread_.joinable()) thread_.join();
}

void Engine::wake() {
  {
    const std::scoped_lock lock(mutex_);
    work_waits_ = true;
  }
  condition_.notify_all();
}

void Engine::loads_changed() {
  loads_dirty_ = true;
  wake();
}

void Engine::run() {
  std::unique_ptr<storage::Reader> reader;
  while (true) {
    try {
      if (!reader) {
        reader = std::make_unique<storage::Reader>(parts_.store.path());
        for (const auto& [channel, furnace] : furnace_of_channel_)
          if (const auto last = reader->newest(channel, latest_time_us))
            parts_.board.set_newest_reading(furnace, last->time_us);
      }
      round(*reader);
    } catch (const std::exception& error) {
      // Loads keep their last views, which age visibly; the next round tries again from the database.
      log_error("engine round failed", {{"what", error.what()}});
      parts_.metrics.add(Total::engine_failures);
      reader.reset();
      tracked_.clear();
      members_behind_ = false;  // or the next try would come without a pause
      loads_dirty_ = true;
    }
    ++rounds_;
    std::unique_lock lock(mutex_);
    if (members_behind_ && !stopping_) continue;
    condition_.wait_for(lock, shortest_round, [this] { return stopping_; });
    condition_.wait_for(lock, longest_round - shortest_round, [this] { return stopping_ || work_waits_; });
    work_waits_ = false;
    if (stopping_) return;
  }
}

void Engine::round(storage::Reader& reader) {
  // Changes are taken before the loads are listed: a load read afterwards has them from the database.
  if (loads_dirty_.exchange(false)) {
    try {
      reconcile(reader);
    } catch (...) {
      loads_dirty_ = true;
      throw;
    }
  }
  apply_changes(reader);
  follow_pushes(reader);
  refresh_views(reader);
  bring_members_up(reader);
  if (caught_up_) look_again(reader);
  caught_up_ = true;
  parts_.metrics.set(Level::open_loads, static_cast<double>(tracked_.size()));
}

// What changed is remembered in memory only: a late reading of an ended load that was committed just before
// the process died would leave the load's old result for good. So after a start the newest ended loads are
// derived once more, one a round.
void Engine::look_again(storage::Reader& reader) {
  constexpr int newest_ended = 200;
  if (!doubts_listed_) {
    const auto rows = reader.loads("", false, 0, newest_ended);
    for (auto row = rows.rbegin(); row != rows.rend(); ++row) doubted_.push_back(row->id);
    doubts_listed_ = true;
  }
  if (doubted_.empty()) return;
  const std::int64_t id = doubted_.back();
  doubted_.pop_back();
  if (const auto row = reader.load(id); row && row->ended_us && !row->cancelled) finish(reader, *row);
}

void Engine::reconcile(storage::Reader& reader) {
  const auto open = reader.open_loads();
  for (auto it = tracked_.begin(); it != tracked_.end();) {
    const bool still = std::any_of(open.begin(), open.end(), [&](const auto& row) {
      return row.id == it->first && row.revision == it->second.row.revision;
    });
    it = still ? std::next(it) : tracked_.erase(it);
  }
  for (const storage::LoadRow& row : reader.ended_without_result()) finish(reader, row);
  for (const std::int64_t id : std::exchange(unfinished_, {}))
    if (const auto row = reader.load(id); row && row->ended_us && !row->cancelled) finish(reader, *row);
  // Also those that need no result any more: cancelled ones, and one that ended while its view was made.
  for (const auto& view : parts_.board.loads()) {
    const std::int64_t id = view->row.id;
    if (std::any_of(open.begin(), open.end(), [&](const auto& row) { return row.id == id; })) continue;
    parts_.board.remove(id);
    fresh_views_.push_back(id);
  }
  for (const storage::LoadRow& row : open) {
    if (tracked_.contains(row.id)) continue;
    try {
      Tracked tracked;
      tracked.row = row;
      tracked.row.definition_json.clear();
      tracked.definition =
          std::make_shared<const LoadDefinition>(read_stored_definition(row.definition_json));
      tracked.load = std::make_unique<LiveLoad>(tracked.definition);
      for (const auto& used : tracked.load->channels().used())
        tracked.channels.push_back(parts_.channel_id(used.furnace, used.name));
      read_all(*tracked.load, source(reader));
      refresh(tracked_[row.id] = std::move(tracked), reader, parts_.clock.now_us());
    } catch (const std::exception& error) {
      log_error("a load cannot be run", {{"load", row.id}, {"name", row.name}, {"what", error.what()}});
      parts_.metrics.add(Total::engine_failures);
      tracked_.erase(row.id);
    }
  }
}

// A span may also be that of a mark, which reaches where there are no readings.
void Engine::note_newest(const storage::ChangedSpan& span, storage::Reader& reader) {
  const auto furnace = furnace_of_channel_.find(span.channel);
  if (furnace == furnace_of_channel_.end()) return;
  if (const auto newest = reader.newest(span.channel, span.to_us))
    parts_.board.set_newest_reading(furnace->second, newest->time_us);
}

void Engine::apply_changes(storage::Reader& reader) {
  // Kept until every one is applied: after a failure the next round has them still.
  for (const storage::ChangedSpan& span : parts_.store.take_changes()) pending_.push_back(span);
  std::map<std::int64_t, storage::LoadRow> ended;
  for (const storage::ChangedSpan& span : pending_) {
    note_newest(span, reader);
    for (auto& [id, tracked] : tracked_) {
      for (std::size_t used = 0; used < tracked.channels.size(); ++used) {
        const std::int64_t from = std::max(span.from_us, tracked.load->readings_from_us());
        if (tracked.channels[used] != span.channel || span.to_us < from) continue;
        read_again(*tracked.load, source(reader), used, from, span.to_us);
        tracked.touched = true;
      }
    }
    const auto furnace = furnace_of_channel_.find(span.channel);
    if (furnace == furnace_of_channel_.end()) continue;
    if (const auto line = push_channels_.find(furnace->second);
        line != push_channels_.end() &&
        parts_.channel_id(furnace->second, line->second->name) == span.channel)
      pushes_may_wait_ = true;
    // A reading before a load came is the first of the line that leads into it.
    const std::int64_t until_us = span.to_us + reach_us_.at(furnace->second);
    for (storage::LoadRow& row : reader.ended_touching(furnace->second, span.from_us, until_us))
      ended.insert_or_assign(row.id, std::move(row));
  }
  // Once each, however many channels a late file has.
  for (const auto& [id, row] : ended) finish(reader, row);
  pending_.clear();
}

// A signal that rises after the last push it gave moves the line; what it says about earlier times is too
// late, the line has moved on since.
void Engine::follow_pushes(storage::Reader& reader) {
  if (!pushes_may_wait_) return;
  for (const auto& [id, channel] : push_channels_) {
    const Furnace& line = *parts_.plant.furnace(id);
    const std::int64_t signal = parts_.channel_id(id, channel->name);
    const auto last = reader.last_push(id, "");
    std::int64_t from_us = last ? last->at_us + 1 : std::numeric_limits<std::int64_t>::max();
    if (!last)
      for (const auto& [load, tracked] : tracked_)
        if (tracked.row.furnace == id) from_us = std::min(from_us, tracked.row.started_us + 1);
    const auto before = reader.newest(signal, from_us - 1);
    const auto samples = reader.accepted(signal, from_us, latest_time_us);
    for (const std::int64_t at_us : rises(samples, before)) {
      if (is_echo(last, at_us)) continue;
      try {
        push_line(line, parts_.store, reader, {id, at_us, "Push signal", "signal"}, parts_.clock.now_us());
        loads_dirty_ = true;
      } catch (const storage::StorageError& error) {
        if (error.fault != storage::StorageFault::misuse) throw;
        log_warn("a push signal moved nothing", {{"furnace", id}, {"why", error.what()}});
      }
    }
  }
  pushes_may_wait_ = false;
  if (loads_dirty_) wake();
}

void Engine::refresh_views(storage::Reader& reader) {
  const std::int64_t now = parts_.clock.now_us();
  double stale = 0;
  for (auto& [id, tracked] : tracked_) {
    const bool due = now - tracked.view_us >= view_refresh_us || now < tracked.view_us;
    if (tracked.touched || due) refresh(tracked, reader, now);
    const auto view = parts_.board.load(id);
    stale += view && view->condition == Condition::stale ? 1 : 0;
  }
  parts_.metrics.set(Level::stale_loads, stale);
  const auto tick = std::chrono::steady_clock::now();
  if (fresh_views_.empty() && tick - published_at_ < longest_silence) return;
  if (parts_.published) parts_.published(fresh_views_);
  fresh_views_.clear();
  published_at_ = tick;
}

// Depths come first: after a start or a long rewind the members follow in slices, so that new readings are
// not kept waiting.
void Engine::bring_members_up(storage::Reader& reader) {
  constexpr auto slice = std::chrono::milliseconds(150);
  constexpr std::size_t intervals_between_looks = 16;
  const auto until = std::chrono::steady_clock::now() + slice;
  members_behind_ = false;
  for (auto& [id, tracked] : tracked_) {
    if (tracked.load->members()) continue;
    while (!tracked.load->bring_members_up(intervals_between_looks)) {
      if (std::chrono::steady_clock::now() < until) continue;
      members_behind_ = true;
      return;
    }
    refresh(tracked, reader, tracked.view_us);
  }
}

// The outlook is worked out once for each interval, and anew when something past has changed.
void Engine::add_outlook_to(LoadView& view, Tracked& tracked) {
  const LiveLoad& load = *tracked.load;
  const auto interval =
      static_cast<std::int64_t>(load.settled_points().size() + load.provisional_points().size());
  if (!tracked.touched && interval == tracked.outlook_interval && tracked.outlook_view) {
    view.outlook = tracked.outlook_view->outlook;
    view.outlook_base = tracked.outlook_view->outlook_base;
    view.outlook_missing = tracked.outlook_view->outlook_missing;
    return;
  }
  if (tracked.offered_joint_chance < 0 && load.members())
    tracked.offered_joint_chance = offered_joint_chance(load.definition(), *load.members()->members());
  add_outlook(view, load, tracked.offered_joint_chance, parts_.standing);
  tracked.outlook_interval = load.members() ? interval : -1;
}

void Engine::refresh(Tracked& tracked, storage::Reader& reader, std::int64_t now_us) {
  const std::uint64_t steps = tracked.load->steps();
  // A few intervals at once; more is done in slices.
  constexpr std::size_t members_at_once = 8;
  tracked.load->advance_to(now_us);
  tracked.load->bring_members_up(members_at_once);
  parts_.metrics.add(Total::engine_steps, static_cast<double>(tracked.load->steps() - steps));
  auto view =
      std::make_shared<LoadView>(make_view(*tracked.load, tracked.definition, now_us, parts_.stale_after_s));
  view->row = tracked.row;
  view->line_position = line_position(*tracked.definition, reader, now_us);
  add_outlook_to(*view, tracked);
  tracked.outlook_view = view;
  parts_.board.publish(std::move(view));
  tracked.touched = false;
  tracked.view_us = now_us;
  fresh_views_.push_back(tracked.row.id);
}

void Engine::finish(storage::Reader& reader, const storage::LoadRow& row) {
  try {
    const auto definition =
        std::make_shared<const LoadDefinition>(read_stored_definition(row.definition_json));
    const auto load = derive(definition, source(reader), *row.ended_us);
    parts_.metrics.add(Total::engine_steps, static_cast<double>(load->steps()));
    const std::string json = result_json(read_result(*load, definition));
    const auto stored = reader.result(row.id);
    // One for each revision, even where a correction changed nothing that the result shows.
    if (!stored || stored->revision != row.revision || stored->result_json != json)
      parts_.store.save_result(
          {row.id, row.revision, parts_.clock.now_us(), solver::model_version, json, false});
  } catch (const storage::StorageError& error) {
    // Remembered by number: one that a late reading changed has an older result, so nobody would miss it.
    log_warn("a result could not be stored yet", {{"load", row.id}, {"what", error.what()}});
    unfinished_.insert(row.id);
    loads_dirty_ = true;
  } catch (const std::exception& error) {
    log_error("an ended load has no result", {{"load", row.id}, {"name", row.name}, {"what", error.what()}});
    parts_.metrics.add(Total::engine_failures);
  }
  if (!parts_.board.load(row.id)) return;
  parts_.board.remove(row.id);
  fresh_views_.push_back(row.id);
}

}  // namespace hearthfront::server
