#include "server/live/solver_inputs.h"

#include <cmath>

namespace hearthfront::server {
namespace {

// How deep the carbon that a rework item brings along reaches: lengths of diffusion add as squares.
double brought_length_m(const Item& item) {
  constexpr double above_core_wt_pct = 0.04;
  if (!item.initial) return 0;
  const double core = item.initial->carbon_wt_pct.back();
  double deepest_mm = 0;
  for (std::size_t i = 0; i < item.initial->depth_mm.size(); ++i)
    if (item.initial->carbon_wt_pct[i] > core + above_core_wt_pct) deepest_mm = item.initial->depth_mm[i];
  return deepest_mm * 1e-3;
}

}  // namespace

PartModel part_model(const LoadDefinition& load, const Item& item) {
  PartModel model;
  solver::CarburizingPart& part = model.part;
  part.section = item.section.in_metres();
  part.steel = item.steel.composition;
  part.core_carbon_wt_pct = item.core_carbon_wt_pct;
  part.lag_s = item.lag_min * 60.0;
  part.film_s = load.film_min * 60.0;
  part.law = load.first_furnace().diffusivity == "tibbetts" ? solver::DiffusivityLaw::tibbetts
                                                            : solver::DiffusivityLaw::agren;

  std::vector<solver::TimeAtTemperature> pieces;
  for (const Segment& segment : load.recipe.segments)
    pieces.push_back({segment.duration_min * 60.0, segment.temperature_degc});
  model.density.diffusion_length_m =
      std::hypot(solver::expected_diffusion_length_m(part.law, pieces), brought_length_m(item));
  return model;
}

solver::GasCarburizing::State start_state(const LoadDefinition& load, const Item& item,
                                          const solver::GasCarburizing& model) {
  if (!item.initial) return model.start(load.charge_temperature_degc);
  solver::Profile profile;
  for (const double depth : item.initial->depth_mm) profile.depth_m.push_back(depth * 1e-3);
  profile.carbon_wt_pct = item.initial->carbon_wt_pct;
  return model.start(load.charge_temperature_degc, profile);
}

solver::IntervalInputs solver_inputs(const IntervalInput& input, double duration_s) {
  solver::IntervalInputs inputs;
  inputs.duration_s = duration_s;
  inputs.furnace_temperature_degc = input.furnace_temperature_degc;
  inputs.load_temperature_degc = input.load_temperature_degc;
  inputs.carbon_potential_wt_pct = input.carbon_potential_wt_pct;
  inputs.co_fraction = input.co_fraction;
  inputs.h2_fraction = input.h2_fraction;
  inputs.furnace = input.furnace;
  inputs.gas = input.gas;
  inputs.doubt.carbon_potential_per_k = input.carbon_potential_per_k;
  inputs.doubt.carbon_source_sd_wt_pct = input.carbon_source_sd_wt_pct;
  return inputs;
}

}  // namespace hearthfront::server
