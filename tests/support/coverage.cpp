#include "support/coverage.h"

#include <algorithm>
#include <cmath>

#include "support/forecaster.h"
#include "support/random.h"

namespace hearthfront::testing {
namespace {

using solver::GasCarburizing;

constexpr double offset_decay_s = 4 * 3600;

// One true part by the model itself.
class TruePart {
 public:
  TruePart(const SyntheticLoad& load, std::uint64_t seed)
      : load_(load),
        truth_(solver::draw_truth(load.priors, {{load.hardness_criterion}}, seed).front()),
        model_(load.part, load.density, {truth_.member}),
        workspace_(model_),
        state_(model_.start(charge_temperature_degc)) {}

  const solver::TrueMember& truth() const { return truth_; }
  const GasCarburizing::State& state() const { return state_; }
  void advance(const solver::IntervalInputs& inputs) { model_.advance(state_, inputs, workspace_); }
  void rewind(const GasCarburizing::State& state) { state_ = state; }
  double case_depth_m() const {
    return depth_at_carbon_m(read_profile(state_.field, 0, state_.conditions[0]),
                             load_.criterion_wt_pct + truth_.criterion_offset_wt_pct)
        .value();
  }

 private:
  const SyntheticLoad& load_;
  solver::TrueMember truth_;
  GasCarburizing model_;
  GasCarburizing::Workspace workspace_;
  GasCarburizing::State state_;
};

// What a logger of this furnace gives, minute by minute, when it follows its recipe.
class Logger {
 public:
  Logger(const SyntheticLoad& load, std::uint64_t seed)
      : load_(load),
        random_(seed),
        to_inputs_(load),
        track_(furnace_start_degc, furnace_start_wt_pct),
        load_degc_(charge_temperature_degc) {}

  solver::IntervalInputs next() {
    const auto set = set_points(load_.recipe, minute_);
    const auto shown = track_.minute(set.temperature_degc, set.carbon_potential_wt_pct);
    const FurnaceTrack::Mean reading{
        shown.temperature_degc + load_.offset_k + random_.normal(),
        shown.carbon_potential_wt_pct + load_.offset_wt_pct + 0.01 * random_.normal()};
    load_degc_ += (reading.temperature_degc - load_degc_) * 60 / load_.part.lag_s;
    const bool missing = load_.in_gap(minute_++);
    return missing ? to_inputs_.missing(set) : to_inputs_.measured(reading, load_degc_ + random_.normal());
  }

  int minute() const { return minute_; }
  const FurnaceTrack& track() const { return track_; }
  solver::FurnaceResponse response() const {
    solver::FurnaceResponse response;
    response.temperature_degc = track_.degc() + load_.offset_k;
    response.carbon_potential_wt_pct = track_.wt_pct() + load_.offset_wt_pct;
    response.offset_k = load_.offset_k;
    response.offset_carbon_potential_wt_pct = load_.offset_wt_pct;
    return response;
  }

 private:
  const SyntheticLoad& load_;
  Random random_;
  LogToInputs to_inputs_;
  FurnaceTrack track_;
  double load_degc_;
  int minute_ = 0;
};

// The true part's minutes from a look to the end of the recipe: the plan, its offsets decaying. A gap that is
// open at the look keeps its error until it ends.
template <class Visit>
void follow_plan(const SyntheticLoad& load, const Logger& logger, const solver::InputDoubt& now,
                 Visit visit) {
  FurnaceTrack track = logger.track();
  bool open_gap = true;
  for (int minute = logger.minute(); minute < load.minutes(); ++minute) {
    const auto set = set_points(load.recipe, minute);
    const auto shown = track.minute(set.temperature_degc, set.carbon_potential_wt_pct);
    const double left = std::exp(-(60.0 * (minute - logger.minute()) + 30) / offset_decay_s);
    solver::IntervalInputs in;
    in.furnace_temperature_degc = shown.temperature_degc + left * load.offset_k;
    in.carbon_potential_wt_pct = std::max(0.0, shown.carbon_potential_wt_pct + left * load.offset_wt_pct);
    in.doubt.carbon_potential_per_k = load.carbon_potential_per_k;
    in.doubt.carbon_source_sd_wt_pct = load.carbon_source_sd_wt_pct;
    in.doubt.future_temperature_sd_k = load.priors.future_temperature_sd_k;
    in.doubt.future_carbon_potential_sd_wt_pct = load.priors.future_carbon_potential_sd_wt_pct;
    open_gap = open_gap && load.in_gap(minute);
    if (open_gap) {
      in.doubt.temperature_gap_sd_k = now.temperature_gap_sd_k;
      in.doubt.carbon_potential_gap_sd_wt_pct = now.carbon_potential_gap_sd_wt_pct;
    }
    visit(in);
  }
}

}  // namespace

Verdicts judge_by_priors(const SyntheticLoad& load, std::uint64_t seed) {
  Random seeds(seed);
  const auto next_seed = [&] { return static_cast<std::uint64_t>(seeds.uniform() * 1e15); };
  Forecaster forecaster(load, next_seed());
  TruePart part(load, next_seed());
  Logger logger(load, next_seed());
  Verdicts verdicts;
  for (std::size_t look = 0; look < looked_at.size(); ++look) {
    while (logger.minute() < look_minute(look, load.minutes())) {
      const solver::IntervalInputs in = logger.next();
      forecaster.advance(in);
      part.advance(in);
    }
    const GasCarburizing::State now = part.state();
    follow_plan(load, logger, forecaster.now().doubt,
                [&](const solver::IntervalInputs& in) { part.advance(in); });
    verdicts[look] = forecaster.look(rest_of(load.recipe, load.recipe, logger.minute()), logger.response(),
                                     part.case_depth_m());
    part.rewind(now);
  }
  return verdicts;
}

SameTruth truth_twice(const SyntheticLoad& load, std::uint64_t seed) {
  TruePart part(load, seed);
  Logger logger(load, seed + 1);
  std::vector<solver::IntervalInputs> inputs;
  while (logger.minute() < load.minutes() / 2) inputs.push_back(logger.next());
  follow_plan(load, logger, inputs.back().doubt,
              [&](const solver::IntervalInputs& in) { inputs.push_back(in); });
  for (const solver::IntervalInputs& in : inputs) part.advance(in);
  return {part.case_depth_m(), plain_depth_m(load, part.truth(), inputs)};
}

}  // namespace hearthfront::testing
