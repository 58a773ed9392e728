// What the engine publishes about loads and furnaces: immutable snapshots that carry their data time, age
// and basis. The board hands them to any thread; a snapshot once published never changes.
#pragma once

#include <atomic>
#include <cstdint>
#include <map>
#include <memory>
#include <mutex>
#include <optional>
#include <string>
#include <vector>

#include "server/live/load_outlook.h"
#include "server/live/run_result.h"
#include "storage/store.h"

namespace hearthfront::server {

enum class Condition { no_load, no_data_yet, stale, live, ended };
const char* text(Condition condition);  // "no load", "no data yet", ...

struct InputNow {
  double value = 0;
  Basis basis = Basis::planned;
  std::optional<double> age_s;  // of the newest reading it rests on; empty: there is none
};

// The points of the plots, thinned; columns of equal length.
struct History {
  std::vector<double> time_s;  // Unix time of the interval's end
  std::vector<double> temperature_degc, carbon_potential_wt_pct;
  std::vector<Basis> temperature_basis, carbon_potential_basis;
  struct ItemColumns {
    std::string name;
    std::vector<std::optional<double>> case_depth_mm;
    std::vector<double> surface_carbon_wt_pct, part_temperature_degc;
    // Band of the finished part; empty where none was worked out. Between two moments of it a straight line.
    std::vector<std::optional<double>> case_depth_low_mm, case_depth_high_mm;
  };
  std::vector<ItemColumns> items;
};
History read_history(const LiveLoad& load, std::size_t max_points);

struct LoadView {
  storage::LoadRow row;  // without its definition text
  RunResult result;
  std::shared_ptr<const History> history;
  std::uint64_t sequence = 0;
  std::int64_t now_us = 0;              // daemon clock when it was made
  std::optional<std::int64_t> data_us;  // newest reading that entered
  Condition condition = Condition::no_data_yet;
  std::string message;  // a sentence about what is amiss; empty: nothing
  InputNow temperature, carbon_potential;
  struct {
    std::size_t index = 0;
    std::int64_t started_us = 0;
    PlacedBy by = PlacedBy::start;
    double elapsed_min = 0, minutes_left = 0, long_by_min = 0;
    std::string doubt;
    std::size_t plan = 0;  // which recipe `index` counts in
  } segment;
  double minutes_left = 0;
  // Empty where there is none; then the sentence says why.
  std::shared_ptr<const LoadOutlook> outlook;
  std::string outlook_missing;
  std::shared_ptr<const OutlookBase> outlook_base;  // for trials; empty where there is no outlook
  // Of a pusher line: the tray's position from the entry on, counted in pushes; empty elsewhere.
  std::optional<int> line_position;
};

// The item to watch: the one with the least chance at the end, or where there is no outlook as run_result has
// it.
std::size_t controlling_item(const LoadView& view);

// Makes everything but row and sequence.
LoadView make_view(const LiveLoad& load, std::shared_ptr<const LoadDefinition> definition,
                   std::int64_t now_us, double stale_after_s);

class Board {
 public:
  void publish(std::shared_ptr<LoadView> view);  // sets its sequence
  void remove(std::int64_t load);
  std::shared_ptr<const LoadView> load(std::int64_t id) const;
  std::vector<std::shared_ptr<const LoadView>> loads() const;
  void set_newest_reading(const std::string& furnace, std::int64_t time_us);  // keeps the newest
  std::optional<std::int64_t> newest_reading(const std::string& furnace) const;
  std::uint64_t sequence() const { return sequence_; }

 private:
  mutable std::mutex mutex_;
  std::map<std::int64_t, std::shared_ptr<const LoadView>> loads_;
  std::map<std::string, std::int64_t> newest_;
  std::atomic<std::uint64_t> sequence_{0};
};

}  // namespace hearthfront::server
