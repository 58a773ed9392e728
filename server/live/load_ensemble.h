// The members of a load: what the model would be if its furnace and parts were a little other than they read.
// Follows the run of the nominal parts over the same lattice intervals, in its own time (bands may come
// seconds after depths), and is as pure: live and replay have the same bits. One thread at a time.
#pragma once

#include <cstdint>
#include <memory>
#include <vector>

#include "server/live/lattice.h"
#include "server/live/load_definition.h"
#include "server/live/solver_inputs.h"
#include "solver/outlook/outlook.h"

namespace hearthfront::server {

// What the model made of one item in one interval, for the history plots.
struct ItemPoint {
  double case_depth_mm = 0, surface_carbon_wt_pct = 0, part_temperature_degc = 0;
  bool depth_known = false;
  std::uint32_t notes = 0;  // solver::Note bits
  solver::OutcomeKind outcome = solver::OutcomeKind::reached;
};

struct RunPoint {
  std::int64_t from_us = 0, to_us = 0;
  IntervalInput input;
  std::vector<ItemPoint> items;
};

// Immutable; shared by the views that were made of it.
struct MemberModels {
  std::vector<solver::GasCarburizing> models;  // of each item
  std::vector<std::vector<double>> criterion_offset_wt_pct;
  std::vector<double> lab_carbon_sd_wt_pct;
};
std::shared_ptr<const MemberModels> make_members(const LoadDefinition& load, std::size_t members,
                                                 std::uint64_t seed);
// Hash of what does not change when a load is corrected or planned anew: start, furnace, number of items.
std::uint64_t member_seed(const LoadDefinition& load);
solver::Priors priors_of(const LoadDefinition& load);

using MemberStates = std::vector<solver::GasCarburizing::State>;
MemberStates start_members(const LoadDefinition& load, const MemberModels& members);

// `states` and `members` must outlive what is returned.
std::vector<solver::OutlookItem> outlook_items(const LoadDefinition& load, const MemberModels& members,
                                               const MemberStates& states);

// How long an input has not been measured, and what that makes of an interval's doubt.
struct GapClock {
  double temperature_s = 0, carbon_potential_s = 0;
  solver::IntervalInputs take(const RunPoint& point);
};

// Bands of one moment of the past.
struct BandPoint {
  std::int64_t interval = 0, at_us = 0;
  std::vector<solver::Band> case_depth_mm;  // of each item, finished part
};

class LoadEnsemble {
 public:
  explicit LoadEnsemble(std::shared_ptr<const LoadDefinition> definition);

  // What was done from `interval` on counts no more.
  void rewind_to(std::int64_t interval);
  // Follows the settled intervals, at most `most_intervals` of them, and once level with them the provisional
  // ones. Returns whether it stands where the run stands.
  bool follow(const std::vector<RunPoint>& settled, const std::vector<RunPoint>& provisional,
              std::size_t most_intervals);

  const std::shared_ptr<const MemberModels>& members() const { return members_; }
  const MemberStates& now() const { return now_.items; }
  const GapClock& gaps() const { return now_.gaps; }
  const std::vector<BandPoint>& bands() const { return bands_; }
  std::uint64_t intervals_done() const { return done_; }

 private:
  struct Mark {
    std::int64_t interval = 0;
    MemberStates items;
    GapClock gaps;
  };
  void advance(Mark& mark, const RunPoint& point);
  void set_mark();
  void note_bands(std::int64_t at_us);

  std::shared_ptr<const LoadDefinition> definition_;
  std::shared_ptr<const MemberModels> members_;
  std::vector<solver::GasCarburizing::Workspace> workspaces_;
  Mark settled_, now_;
  std::vector<Mark> marks_;  // ascending; the first is the start
  std::vector<BandPoint> bands_;
  std::uint64_t done_ = 0;
};

}  // namespace hearthfront::server
