// What the outlook knows of a load as it goes, and what it says when asked. Private to tests/support.
#pragma once

#include <stdexcept>
#include <vector>

#include "support/coverage.h"

namespace hearthfront::testing {

// The ensemble of a load and what is asked of it.
class Forecaster {
 public:
  Forecaster(const SyntheticLoad& load, std::uint64_t seed)
      : load_(load),
        draws_(solver::draw_members(load.priors, {{load.hardness_criterion}}, seed).front()),
        model_(load.part, load.density, draws_.lanes),
        workspace_(model_),
        state_(model_.start(charge_temperature_degc)) {}

  void advance(const solver::IntervalInputs& inputs) {
    now_ = inputs;
    model_.advance(state_, inputs, workspace_);
  }

  const solver::IntervalInputs& now() const { return now_; }

  Verdict look(const std::vector<solver::PlannedSegment>& plan, const solver::FurnaceResponse& furnace,
               double truth_m) {
    solver::IntervalInputs now = now_;
    now.doubt.future_temperature_sd_k = load_.priors.future_temperature_sd_k;
    now.doubt.future_carbon_potential_sd_wt_pct = load_.priors.future_carbon_potential_sd_wt_pct;
    solver::OutlookItem item;
    item.model = &model_;
    item.state = &state_;
    item.criterion_offset_wt_pct = &draws_.criterion_offset_wt_pct;
    item.criterion_wt_pct = load_.criterion_wt_pct;
    item.case_depth_window_m = load_.window_m;
    solver::OutlookItem beside = item;  // asked for the truth in place of its window
    beside.case_depth_window_m = {truth_m, 1.0};
    solver::OutlookOptions options;
    options.course_step_s = 1e9;
    options.beyond_s = 0;
    const solver::Outlook outlook = solver::project({item, beside}, plan, furnace, now, options);
    if (outlook.failed) throw std::runtime_error("the outlook failed");
    Verdict verdict;
    verdict.band_m = outlook.end.items[0].case_depth_m;
    verdict.chance = outlook.end.items[0].case_depth;
    verdict.window_m = load_.window_m;
    verdict.truth_m = truth_m;
    verdict.below_truth = outlook.end.items[1].case_depth.below;
    return verdict;
  }

 private:
  const SyntheticLoad& load_;
  solver::ItemDraws draws_;
  solver::GasCarburizing model_;
  solver::GasCarburizing::Workspace workspace_;
  solver::GasCarburizing::State state_;
  solver::IntervalInputs now_;
};

inline int look_minute(std::size_t look, int minutes) {
  return static_cast<int>(looked_at[look] * minutes);
}

}  // namespace hearthfront::testing
