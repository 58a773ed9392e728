// Ten situations in which a shop asks what still saves a load: what was planned, what happened, what may be
// changed. Invented; windows are shares of the depth that the undisturbed plan would give, for a furnace that
// is known well (priors as after a few coupons).
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "solver/outlook/search.h"
#include "solver/solver.h"

namespace hearthfront::testing {

// One stretch of the past: what the furnace really showed.
struct PastStretch {
  double duration_s, temperature_degc, carbon_potential_wt_pct;
  bool gas = true;
  bool measured = true;  // else nothing was logged, and the plan was assumed
};

struct SituationItem {
  std::string steel;  // what it really is
  solver::Section section;
  double low_share = 0.92, high_share = 1.10;  // of the depth that the plan was to give this item
  std::optional<solver::Window> surface_window_wt_pct;
  std::string planned_steel;  // what the plan was made for, where another
};

struct Situation {
  std::string name;
  std::vector<SituationItem> items;
  std::vector<PastStretch> planned, past;    // both from the start; `planned` to its end
  std::vector<solver::PlannedSegment> rest;  // as planned, from now on
  std::vector<solver::SegmentFreedom> freedom;
  double offset_k = 0, offset_wt_pct = 0;  // what the furnace shows beside its set points now
  solver::SearchLimits limits;
  // What a heat treater would say; the test asks brute force as well.
  solver::SearchEnd end = solver::SearchEnd::found;
};

std::vector<Situation> ten_situations();

// The load of a situation as it stands now, with `members` from `seed`.
class SituationLoad {
 public:
  SituationLoad(const Situation& situation, std::uint64_t seed, std::size_t members);
  SituationLoad(const SituationLoad&) = delete;
  SituationLoad& operator=(const SituationLoad&) = delete;

  const std::vector<solver::OutlookItem>& items() const { return items_; }
  const solver::FurnaceResponse& furnace() const { return furnace_; }
  const solver::IntervalInputs& now() const { return now_; }

 private:
  std::vector<solver::ItemDraws> draws_;
  std::vector<solver::GasCarburizing> models_;
  std::vector<solver::GasCarburizing::State> states_;
  std::vector<solver::OutlookItem> items_;
  solver::FurnaceResponse furnace_;
  solver::IntervalInputs now_;
};

}  // namespace hearthfront::testing
