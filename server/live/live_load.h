// One load's model run: a pure function of its definition, its readings and the time asked for. Live
// running, restart and replay all use this class, so their results are the same bits.
//
// `settled` state stands on a lattice point that no reading in time can change any more; the stretch from
// there to the asked time is advanced on a copy and thrown away at the next call. A late reading rewinds
// to a mark before its interval. Marks are log-spaced, so memory stays bounded. One thread at a time.
#pragma once

#include <cstdint>
#include <limits>
#include <memory>
#include <optional>
#include <string>
#include <vector>

#include "server/live/lattice.h"
#include "server/live/load_definition.h"
#include "server/live/load_ensemble.h"
#include "server/live/recipe_place.h"
#include "solver/solver.h"

namespace hearthfront::server {

class LiveLoad {
 public:
  explicit LiveLoad(std::shared_ptr<const LoadDefinition> definition);

  const LoadDefinition& definition() const { return *definition_; }
  const LoadChannels& channels() const { return channels_; }
  // Readings before this have no influence on the run.
  std::int64_t readings_from_us() const { return definition_->started_us - channels_.reach_us(); }

  // The accepted readings of one used channel in [from, to], in the channel's own unit.
  void replace_readings(std::size_t used, std::int64_t from_us, std::int64_t to_us,
                        std::vector<Sample> samples);

  // The stretches that people marked on one used channel.
  void set_marks(std::size_t used, std::vector<TimeSpan> marks);

  // Brings the run to `now_us`, or to the load's end where that is earlier.
  void advance_to(std::int64_t now_us);

  // Lets the members follow, by at most so many intervals; true once they stand where the run stands. Nothing
  // of them is made before the first call.
  bool bring_members_up(std::size_t most_intervals = std::numeric_limits<std::size_t>::max());
  // The members, where they stand where the run stands; else null.
  const LoadEnsemble* members() const { return members_level_ ? members_.get() : nullptr; }

  // Valid after advance_to.
  std::int64_t state_us() const { return state_us_; }
  bool at_end() const { return definition_->ended_us && state_us_ == *definition_->ended_us; }
  std::size_t item_count() const { return definition_->items.size(); }
  const solver::GasCarburizing& model(std::size_t item) const { return models_[item]; }
  const solver::GasCarburizing::State& state(std::size_t item) const { return now_.items[item]; }
  const RecipePlace& recipe_place() const { return now_.place; }
  // Every interval from the start to state_us, the provisional ones at the end included.
  template <typename Visit>
  void each_point(Visit visit) const {
    for (const RunPoint& p : settled_points_) visit(p);
    for (const RunPoint& p : provisional_points_) visit(p);
  }
  const std::vector<RunPoint>& settled_points() const { return settled_points_; }
  const std::vector<RunPoint>& provisional_points() const { return provisional_points_; }
  std::uint64_t steps() const;  // solver steps done so far, rewinds included
  std::size_t marks() const { return marks_.size(); }

 private:
  struct RunState {
    std::int64_t interval = 0;  // intervals done
    std::vector<solver::GasCarburizing::State> items;
    RecipePlace place;
    std::size_t plan = 0;  // adopted plans that are in force
  };

  std::int64_t lattice_us(std::int64_t interval) const;
  void rewind_before(std::int64_t time_us);
  RunPoint advance(RunState& state, std::int64_t to_us);
  void place(RunState& state, const RunPoint& point) const;
  void set_mark();

  std::shared_ptr<const LoadDefinition> definition_;
  LoadChannels channels_;
  std::int64_t lattice_us_;
  std::vector<solver::GasCarburizing> models_;
  std::vector<solver::GasCarburizing::Workspace> workspaces_;
  RunState settled_, now_;
  std::vector<RunState> marks_;  // ascending; the first is the start
  std::vector<RunPoint> settled_points_, provisional_points_;
  std::unique_ptr<LoadEnsemble> members_;
  bool members_level_ = false;
  std::int64_t state_us_;
};

}  // namespace hearthfront::server
