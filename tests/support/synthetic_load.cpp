#include "support/synthetic_load.h"

#include <algorithm>
#include <cmath>

#include "support/cycles.h"
#include "support/random.h"

namespace hearthfront::testing {
namespace {

constexpr double hold_limit_s = 1200;
// Nobody asks for less: a cycle too short for its part is drawn again.
constexpr double least_depth_m = 0.15e-3;

double whole_minutes(double seconds) {
  return 60 * std::round(seconds / 60);
}

std::vector<solver::PlannedSegment> draw_recipe(Random& random) {
  const double total_s = 3600 * std::exp(random.between(std::log(1.0), std::log(12.0)));
  const double degc = 5 * std::round(random.between(880, 980) / 5);
  const double boost_wt_pct = random.between(0.95, 1.15), diffuse_wt_pct = random.between(0.70, 0.85);
  const double boost_share = random.between(0.45, 0.75);
  const bool equalize = random.happens(0.6);
  const double carburize_s = equalize ? 0.85 * total_s : total_s;
  std::vector<solver::PlannedSegment> recipe{
      {whole_minutes(random.between(1200, 3000)), degc, 0.7, 0, {}},
      {whole_minutes(boost_share * carburize_s), degc, boost_wt_pct, 0, {}},
      {whole_minutes((1 - boost_share) * carburize_s), degc, diffuse_wt_pct, 0, {}}};
  if (equalize)
    recipe.push_back(
        {std::max(1800.0, whole_minutes(0.15 * total_s)), random.between(835, 860), diffuse_wt_pct, 900, {}});
  return recipe;
}

solver::CarburizingPart draw_part(Random& random, std::string& steel) {
  const auto steels = case_steels();
  const solver::Steel& drawn = steels[random.below(steels.size())];
  steel = drawn.name;
  solver::CarburizingPart part;
  const solver::Shape shapes[] = {solver::Shape::plate, solver::Shape::cylinder, solver::Shape::sphere};
  part.section = {shapes[random.below(3)], random.between(5e-3, 25e-3), 0};
  part.steel = drawn.composition;
  part.core_carbon_wt_pct = drawn.composition.c_wt_pct;
  part.lag_s = random.between(600, 2400);
  if (random.happens(0.3)) part.film_s = 600;
  return part;
}

// What the nominal part would reach if the furnace did as planned.
double nominal_depth_m(const SyntheticLoad& load) {
  const solver::GasCarburizing model(load.part, load.density);
  solver::GasCarburizing::State state = model.start(charge_temperature_degc);
  solver::GasCarburizing::Workspace workspace(model);
  FurnaceTrack track(furnace_start_degc, furnace_start_wt_pct);
  for (int minute = 0; minute < load.minutes(); ++minute) {
    const auto set = set_points(load.recipe, minute);
    const auto shown = track.minute(set.temperature_degc, set.carbon_potential_wt_pct);
    solver::IntervalInputs in;
    in.furnace_temperature_degc = shown.temperature_degc;
    in.carbon_potential_wt_pct = shown.carbon_potential_wt_pct;
    model.advance(state, in, workspace);
  }
  return depth_at_carbon_m(read_profile(state.field, 0, state.conditions[0]), load.criterion_wt_pct).value();
}

}  // namespace

int SyntheticLoad::minutes() const {
  double sum_s = 0;
  for (const auto& segment : recipe) sum_s += segment.duration_s;
  return static_cast<int>(std::lround(sum_s / 60));
}

bool SyntheticLoad::in_gap(int minute) const {
  return std::any_of(gaps.begin(), gaps.end(), [minute](const Gap& gap) {
    return minute >= gap.from_minute && minute < gap.to_minute;
  });
}

namespace {

SyntheticLoad draw_once(Random& random) {
  SyntheticLoad load;
  load.part = draw_part(random, load.steel);
  load.recipe = draw_recipe(random);
  std::vector<solver::TimeAtTemperature> pieces;
  for (const auto& segment : load.recipe) pieces.push_back({segment.duration_s, segment.temperature_degc});
  load.density.diffusion_length_m =
      solver::expected_diffusion_length_m(solver::DiffusivityLaw::agren, pieces);
  load.hardness_criterion = random.happens(0.7);
  load.criterion_wt_pct = load.hardness_criterion ? random.between(0.33, 0.40) : 0.35;
  load.load_thermocouple = random.happens(0.3);
  // SAE AMS 2750F, classes 1, 2 and 4.
  const double uniformity_k[] = {3, 6, 10};
  load.priors.uniformity_half_width_k = uniformity_k[random.below(3)];
  load.offset_k = 4 * random.normal();
  load.offset_wt_pct = 0.02 * random.normal();
  if (random.happens(0.5)) {  // from a probe's emf; carbon potential at fixed emf, computed at 927 degC
    load.carbon_potential_per_k = -0.0036;
    load.carbon_source_sd_wt_pct = 0.03;
  }
  if (random.happens(0.4)) {
    const int length = static_cast<int>(std::min(random.between(15, 120), 0.3 * load.minutes()));
    const int from = static_cast<int>(random.between(0.05, 0.95) * (load.minutes() - length));
    load.gaps.push_back({from, from + length});
  }
  const double depth_m = nominal_depth_m(load);
  const double centre = depth_m * std::exp(0.10 * random.normal()),
               half = random.between(0.04, 0.25) * depth_m;
  load.window_m = {centre - half, centre + half};
  return load;
}

}  // namespace

SyntheticLoad draw_load(std::uint64_t seed) {
  Random random(seed);
  for (;;) {
    SyntheticLoad load = draw_once(random);
    if (load.window_m.first > least_depth_m) return load;
  }
}

FurnaceTrack::Mean FurnaceTrack::minute(double set_degc, double set_wt_pct) {
  constexpr double minute_s = 60, temperature_lag_s = 600, carbon_potential_lag_s = 720, fastest_k_s = 0.15;
  Mean mean{};
  const double kept = std::exp(-minute_s / temperature_lag_s);
  const double end = set_degc + (degc_ - set_degc) * kept;
  if (end - degc_ > fastest_k_s * minute_s) {
    mean.temperature_degc = degc_ + 0.5 * fastest_k_s * minute_s;
    degc_ += fastest_k_s * minute_s;
  } else {
    mean.temperature_degc = set_degc + (degc_ - set_degc) * (1 - kept) * temperature_lag_s / minute_s;
    degc_ = end;
  }
  const double stays = std::exp(-minute_s / carbon_potential_lag_s);
  mean.carbon_potential_wt_pct =
      set_wt_pct + (wt_pct_ - set_wt_pct) * (1 - stays) * carbon_potential_lag_s / minute_s;
  wt_pct_ = set_wt_pct + (wt_pct_ - set_wt_pct) * stays;
  return mean;
}

FurnaceTrack::Mean set_points(const std::vector<solver::PlannedSegment>& recipe, int minute) {
  double at_s = 60.0 * minute + 30;
  std::size_t i = 0;
  while (i + 1 < recipe.size() && at_s >= recipe[i].duration_s) at_s -= recipe[i++].duration_s;
  const solver::PlannedSegment& now = recipe[i];
  if (i == 0 || at_s >= now.ramp_s) return {now.temperature_degc, now.carbon_potential_wt_pct};
  const double share = at_s / now.ramp_s;
  const solver::PlannedSegment& before = recipe[i - 1];
  return {before.temperature_degc + share * (now.temperature_degc - before.temperature_degc),
          before.carbon_potential_wt_pct +
              share * (now.carbon_potential_wt_pct - before.carbon_potential_wt_pct)};
}

std::vector<solver::PlannedSegment> rest_of(const std::vector<solver::PlannedSegment>& planned,
                                            const std::vector<solver::PlannedSegment>& actual, int minute) {
  double elapsed_s = 60.0 * minute;
  std::size_t i = 0;
  while (i + 1 < actual.size() && elapsed_s >= actual[i].duration_s) elapsed_s -= actual[i++].duration_s;
  std::vector<solver::PlannedSegment> rest(planned.begin() + static_cast<std::ptrdiff_t>(i), planned.end());
  rest.front().duration_s = std::max(0.0, rest.front().duration_s - elapsed_s);
  rest.front().ramp_s = std::max(0.0, rest.front().ramp_s - elapsed_s);
  return rest;
}

solver::InputDoubt LogToInputs::doubt() const {
  solver::InputDoubt doubt;
  doubt.carbon_potential_per_k = load_.carbon_potential_per_k;
  doubt.carbon_source_sd_wt_pct = load_.carbon_source_sd_wt_pct;
  return doubt;
}

solver::IntervalInputs LogToInputs::measured(FurnaceTrack::Mean reading, double load_degc) {
  missing_s_ = 0;
  last_ = {};
  last_.furnace_temperature_degc = reading.temperature_degc;
  last_.carbon_potential_wt_pct = std::max(0.0, reading.carbon_potential_wt_pct);
  if (load_.load_thermocouple) last_.load_temperature_degc = load_degc;
  last_.doubt = doubt();
  return last_;
}

solver::IntervalInputs LogToInputs::missing(FurnaceTrack::Mean planned) {
  missing_s_ += 60;
  if (missing_s_ > hold_limit_s) {
    last_.furnace_temperature_degc = planned.temperature_degc;
    last_.load_temperature_degc.reset();
    last_.carbon_potential_wt_pct = planned.carbon_potential_wt_pct;
  }
  last_.doubt = doubt();
  last_.doubt.temperature_gap_sd_k = solver::temperature_gap_sd_k(missing_s_);
  last_.doubt.carbon_potential_gap_sd_wt_pct = solver::carbon_potential_gap_sd_wt_pct(missing_s_);
  return last_;
}

}  // namespace hearthfront::testing
