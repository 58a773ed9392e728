#include "support/situations.h"

#include <algorithm>
#include <cmath>

#include "support/cycles.h"

namespace hearthfront::testing {
namespace {

using solver::PlannedSegment;
using solver::SegmentFreedom;
using solver::Shape;

constexpr double hour = 3600;
constexpr double criterion_wt_pct = 0.36;

solver::Priors well_known() {
  solver::Priors priors;
  priors.thermocouple_half_width_k = 2;
  priors.uniformity_half_width_k = 3;
  priors.beta_sd_ln = 0.10;
  priors.diffusivity_sd_ln = 0.02;
  priors.lag_sd_ln = 0.10;
  priors.core_carbon_half_width_wt_pct = 0.01;
  priors.criterion_sd_wt_pct = 0.01;
  return priors;
}

solver::CarburizingPart part_of(const SituationItem& item, const std::string& steel) {
  solver::CarburizingPart part;
  part.section = item.section;
  part.steel = case_steel(steel.c_str()).composition;
  part.core_carbon_wt_pct = part.steel.c_wt_pct;
  part.lag_s = 900;
  return part;
}

solver::MeshDensity density_of(const Situation& situation) {
  std::vector<solver::TimeAtTemperature> pieces;
  for (const PastStretch& each : situation.planned)
    pieces.push_back({each.duration_s, each.temperature_degc});
  solver::MeshDensity density;
  density.diffusion_length_m = solver::expected_diffusion_length_m(solver::DiffusivityLaw::agren, pieces);
  return density;
}

// Minutes of a past; `missing_s` counts what was not logged.
std::vector<solver::IntervalInputs> minutes_of(const std::vector<PastStretch>& past) {
  std::vector<solver::IntervalInputs> inputs;
  for (const PastStretch& each : past)
    for (int minute = 0; minute < std::lround(each.duration_s / 60); ++minute) {
      solver::IntervalInputs in;
      in.furnace_temperature_degc = each.temperature_degc;
      in.carbon_potential_wt_pct = each.carbon_potential_wt_pct;
      in.gas = each.gas;
      in.doubt.carbon_source_sd_wt_pct = 0.015;
      if (!each.measured) {
        in.doubt.temperature_gap_sd_k = solver::temperature_gap_sd_k(60.0 * minute);
        in.doubt.carbon_potential_gap_sd_wt_pct = solver::carbon_potential_gap_sd_wt_pct(60.0 * minute);
      }
      inputs.push_back(in);
    }
  return inputs;
}

double planned_depth_m(const Situation& situation, const SituationItem& item) {
  const std::string& steel = item.planned_steel.empty() ? item.steel : item.planned_steel;
  const solver::GasCarburizing model(part_of(item, steel), density_of(situation));
  solver::GasCarburizing::State state = model.start(20);
  run(model, state, minutes_of(situation.planned));
  return depth_at_carbon_m(read_profile(state.field, 0, state.conditions[0]), criterion_wt_pct).value();
}

const SituationItem plate{"20MnCr5", {Shape::plate, 10e-3, 0}, 0.92, 1.10, {}, {}};

// Heat up 40 min, boost 4 h at 1.10, diffuse 1.5 h at 0.80, 930 degC; 1 h 40 min of boost is over.
Situation in_boost(std::string name) {
  Situation s;
  s.name = std::move(name);
  s.items = {plate};
  s.planned = {{2400, 930, 0.8}, {4 * hour, 930, 1.10}, {1.5 * hour, 930, 0.80}};
  s.past = {{2400, 930, 0.8}, {6000, 930, 1.10}};
  s.rest = {{8400, 930, 1.10, 0, {}}, {5400, 930, 0.80, 0, {}}};
  s.freedom = {SegmentFreedom{}, SegmentFreedom{true, false, false, 1200}};
  s.limits.asked_chance = 0.9;
  return s;
}

}  // namespace

std::vector<Situation> ten_situations() {
  std::vector<Situation> all;
  Situation s = in_boost("running cold");
  s.past[1].temperature_degc = 915;
  s.offset_k = -15;
  all.push_back(s);

  s = in_boost("lost an hour");
  s.past = {{2400, 930, 0.8}, {2400, 930, 1.10}, {hour, 880, 0, false}};
  all.push_back(s);

  s = in_boost("probe read high: the gas was leaner than set");
  s.past[1].carbon_potential_wt_pct = 0.98;
  s.offset_wt_pct = -0.12;
  all.push_back(s);

  s = in_boost("mixed load, windows that exclude each other");
  s.items = {plate, plate};
  s.items[0].low_share = 0.70;
  s.items[0].high_share = 0.85;
  s.items[1].low_share = 1.0;
  s.items[1].high_share = 1.2;
  s.end = solver::SearchEnd::conflict;
  all.push_back(s);

  s = in_boost("window already passed");
  s.past[1].duration_s = 9 * hour;
  s.end = solver::SearchEnd::window_passed;
  all.push_back(s);

  s = in_boost("soot limit binds: rich surface asked of a cool furnace");
  for (auto* stretches : {&s.planned, &s.past})
    for (PastStretch& each : *stretches) each.temperature_degc = 870;
  s.items[0].steel = "8620";
  s.items[0].surface_window_wt_pct = solver::Window{1.06, 1.25};
  s.rest = {{8400, 870, 0.90, 0, {}}, {5400, 870, 0.90, 0, {}}};
  s.freedom[1].carbon_potential = true;
  s.end = solver::SearchEnd::ceiling;
  all.push_back(s);

  s = in_boost("two items of different shape");
  s.past[1].temperature_degc = 920;
  s.offset_k = -10;
  s.items = {plate, {"18CrNiMo7-6", {Shape::cylinder, 6e-3, 0}, 0.92, 1.12, {}, {}}};
  all.push_back(s);

  s = in_boost("late in diffuse, shallow");
  s.past = {{2400, 930, 0.8}, {3.5 * hour, 922, 1.06}, {4200, 922, 0.80}};
  s.offset_k = -8;
  s.rest = {{1200, 930, 0.80, 0, {}}};
  s.freedom = {SegmentFreedom{}};
  all.push_back(s);

  s = in_boost("nothing logged for an hour of boost");
  s.past = {{2400, 930, 0.8}, {1800, 930, 1.10}, {hour, 930, 1.10, true, false}, {600, 930, 1.10}};
  s.items[0].low_share = 0.94;
  s.items[0].high_share = 1.16;
  all.push_back(s);

  s = in_boost("wrong steel, corrected");
  s.items[0].planned_steel = "20MnCr5";
  s.items[0].steel = "9310";
  all.push_back(s);
  return all;
}

SituationLoad::SituationLoad(const Situation& situation, std::uint64_t seed, std::size_t members) {
  draws_ = solver::draw_members(well_known(), std::vector<solver::ItemPriors>(situation.items.size()), seed,
                                members);
  const auto inputs = minutes_of(situation.past);
  models_.reserve(situation.items.size());
  states_.reserve(situation.items.size());
  for (std::size_t i = 0; i < situation.items.size(); ++i) {
    const SituationItem& item = situation.items[i];
    models_.emplace_back(part_of(item, item.steel), density_of(situation), draws_[i].lanes);
    states_.push_back(models_.back().start(20));
    run(models_.back(), states_.back(), inputs);
    const double planned_m = planned_depth_m(situation, item);
    solver::OutlookItem asked;
    asked.model = &models_.back();
    asked.state = &states_.back();
    asked.criterion_offset_wt_pct = &draws_[i].criterion_offset_wt_pct;
    asked.criterion_wt_pct = criterion_wt_pct;
    asked.case_depth_window_m = {item.low_share * planned_m, item.high_share * planned_m};
    asked.surface_carbon_window_wt_pct = item.surface_window_wt_pct;
    items_.push_back(asked);
  }
  now_ = inputs.back();
  now_.gas = true;
  now_.doubt.temperature_gap_sd_k = now_.doubt.carbon_potential_gap_sd_wt_pct = 0;
  now_.doubt.future_temperature_sd_k = 2;
  now_.doubt.future_carbon_potential_sd_wt_pct = 0.015;
  furnace_.temperature_degc = now_.furnace_temperature_degc;
  furnace_.carbon_potential_wt_pct = now_.carbon_potential_wt_pct;
  furnace_.offset_k = situation.offset_k;
  furnace_.offset_carbon_potential_wt_pct = situation.offset_wt_pct;
}

}  // namespace hearthfront::testing
