#include "solver/process/gas_carburizing.h"

#include <algorithm>
#include <cmath>
#include <limits>
#include <stdexcept>

#include "solver/atmosphere/carbon_gas.h"
#include "solver/material/activity.h"
#include "solver/material/alloy.h"
#include "solver/material/constants.h"

namespace hearthfront::solver {
namespace {

// What counts as a jump: well above the noise of a probe (about 0.01 wt%) and of a thermocouple.
constexpr double jump_carbon_potential_wt_pct = 0.05;
constexpr double jump_temperature_k = 10.0;

double kelvin(double degc) {
  return degc + zero_celsius_k;
}

bool is_fraction(const std::optional<double>& value) {
  return !value || (*value >= 0.0 && *value <= 1.0);
}

bool computable(const IntervalInputs& in) {
  const bool gas_known =
      std::isfinite(in.carbon_potential_wt_pct) && is_fraction(in.co_fraction) && is_fraction(in.h2_fraction);
  return in.duration_s > 0.0 && std::isfinite(in.duration_s) && std::isfinite(in.furnace_temperature_degc) &&
         std::isfinite(in.load_temperature_degc.value_or(0.0)) && (gas_known || !in.gas);
}

// What one member adds to the temperature whichever couple measured it.
double temperature_error_k(const Member& member, const InputDoubt& doubt) {
  return member.temperature_offset_k + member.temperature_gap_error * doubt.temperature_gap_sd_k +
         member.future_temperature_error * doubt.future_temperature_sd_k;
}

double carbon_potential_error_wt_pct(const Member& member, const InputDoubt& doubt) {
  return member.carbon_potential_offset_wt_pct + member.thermocouple_offset_k * doubt.carbon_potential_per_k +
         member.carbon_source_error * doubt.carbon_source_sd_wt_pct +
         member.carbon_potential_gap_error * doubt.carbon_potential_gap_sd_wt_pct +
         member.future_carbon_potential_error * doubt.future_carbon_potential_sd_wt_pct;
}

// Mean of 1 - exp(-t/constant) from `age` on, for `length`.
double film_share(double age_s, double length_s, double constant_s) {
  return 1.0 + constant_s / length_s * std::exp(-age_s / constant_s) * std::expm1(-length_s / constant_s);
}

// Share of the flux that a member too cold by so many kelvins takes up: with a rise at once to all of it, its
// start would be a jump again.
double cold_pace(double too_cold_k) {
  return std::max(0.5, 1.0 - too_cold_k / 60.0);
}

void check_profile(const Profile& profile, const Mesh& mesh) {
  const auto& x = profile.depth_m;
  const auto& c = profile.carbon_wt_pct;
  if (x.size() < 4 || x.size() != c.size())
    throw std::invalid_argument("initial profile: four depths or more are needed, each with its carbon");
  const bool ascends =
      std::adjacent_find(x.begin(), x.end(), [](double a, double b) { return !(a < b); }) == x.end();
  const double extent = mesh.section.extent_m;
  if (!ascends || std::fabs(x.front()) > 1e-9 || x.back() > extent * (1 + 1e-9) ||
      x.back() + 0.5 * (x.back() - x[x.size() - 2]) < 0.95 * extent)
    throw std::invalid_argument("initial profile: depths must ascend from 0 to the centre of this section");
  if (!std::all_of(c.begin(), c.end(), [](double v) { return v >= 0.0 && v <= 2.6; }))
    throw std::invalid_argument("initial profile: carbon outside 0-2.6 wt%");
}

}  // namespace

GasCarburizing::Workspace::Workspace(const GasCarburizing& model)
    : stepper_(model.mesh().nodes(), model.lanes()),
      part_mean_degc_(model.lanes()),
      part_end_degc_(model.lanes()),
      good_conditions_(model.lanes()) {
  const CarbonField shape(model.mesh_, model.lanes(), 0.0);
  good_values_.resize(shape.values.size());
  good_crossed_.resize(shape.crossed_wt_pct_m.size());
}

GasCarburizing::GasCarburizing(const CarburizingPart& part, const MeshDensity& density,
                               std::vector<Member> members)
    : part_(part),
      members_(std::move(members)),
      mesh_(std::make_shared<const Mesh>(make_mesh(part.section, density))),
      alloy_factor_(alloy_factor_k(part.steel)),
      diffusivity_factor_(diffusivity_factor(part.steel)),
      austenite_from_degc_(ae3_degc(part.steel, part.core_carbon_wt_pct)) {}

GasCarburizing::State GasCarburizing::start(double charge_temperature_degc) const {
  return start_from(charge_temperature_degc, [&](std::size_t) { return part_.core_carbon_wt_pct; });
}

GasCarburizing::State GasCarburizing::start(double charge_temperature_degc, const Profile& initial) const {
  check_profile(initial, *mesh_);
  return start_from(charge_temperature_degc,
                    [&](std::size_t node) { return carbon_at_depth_wt_pct(initial, mesh_->depth_m[node]); });
}

template <class CarbonAtNode>
GasCarburizing::State GasCarburizing::start_from(double charge_temperature_degc,
                                                 CarbonAtNode carbon_at) const {
  State state{CarbonField(mesh_, lanes(), part_.core_carbon_wt_pct),
              std::vector<double>(lanes(), charge_temperature_degc),
              std::vector<LaneConditions>(lanes()),
              std::vector<double>(lanes()),
              {}};
  for (std::size_t lane = 0; lane < lanes(); ++lane) {
    for (std::size_t i = 0; i < mesh_->nodes(); ++i)
      state.field.set_carbon_wt_pct(lane, i, carbon_at(i) + members_[lane].core_carbon_offset_wt_pct);
    state.initial_wt_pct_m.push_back(state.field.inventory_wt_pct_m(lane));
    LaneConditions& c = state.conditions[lane];
    c.diffusivity = diffusivity_form(DiffusivityLaw::constant, 0, 1, 1e-30);
    c.surface = {part_.core_carbon_wt_pct, std::numeric_limits<double>::infinity(), 0.0};
  }
  return state;
}

GasCarburizing GasCarburizing::lane_alone(std::size_t lane) const {
  GasCarburizing alone = *this;
  alone.members_ = {members_[lane]};
  return alone;
}

GasCarburizing::State GasCarburizing::lane_alone(const State& state, std::size_t lane) const {
  State alone = state;
  alone.field = CarbonField(mesh_, 1, 0.0);
  for (std::size_t i = 0; i < mesh_->nodes(); ++i)
    alone.field.set_carbon_wt_pct(0, i, state.field.carbon_wt_pct(lane, i));
  alone.field.crossed_wt_pct_m = {state.field.crossed_wt_pct_m[lane]};
  alone.part_temperature_degc = {state.part_temperature_degc[lane]};
  alone.conditions = {state.conditions[lane]};
  alone.owed_s = {state.owed_s[lane]};
  alone.initial_wt_pct_m = {state.initial_wt_pct_m[lane]};
  return alone;
}

// Mean over the interval.
double GasCarburizing::lane_beta_m_per_s(const State& state, const IntervalInputs& inputs,
                                         const Member& member, double t_k) const {
  const FurnaceSettings furnace =
      inputs.furnace.value_or(FurnaceSettings{part_.beta_m_per_s, part_.co_fraction, part_.h2_fraction});
  const double co = inputs.co_fraction.value_or(furnace.co_fraction);
  const double h2 = inputs.h2_fraction.value_or(furnace.h2_fraction);
  double beta = member.beta_scale;
  if (!furnace.beta_m_per_s)
    beta *= transfer_coefficient_m_per_s(co, h2, t_k);
  else if (inputs.co_fraction || inputs.h2_fraction)
    beta *= *furnace.beta_m_per_s * transfer_ratio(co, h2, furnace.co_fraction, furnace.h2_fraction);
  else
    beta *= *furnace.beta_m_per_s;
  const double film_s = part_.film_s * member.film_scale;
  return film_s > 0.0 ? beta * film_share(state.film_age_s, inputs.duration_s, film_s) : beta;
}

// How fast time passes in a member. Were one that lags behind the nominal part to start later by itself, that
// would be a jump which no step was made small for; one that is ahead has to wait for it. So all start
// together: a member that is still too cold slowly, one that is owed time as austenite at twice the pace
// until it has it.
double GasCarburizing::member_pace(State& state, const IntervalInputs& inputs, std::size_t lane,
                                   double part_degc) const {
  if (lane == 0) return 1.0;
  if (part_degc <= austenite_from_degc_) return cold_pace(austenite_from_degc_ - part_degc);
  const double paid = std::min(state.owed_s[lane], inputs.duration_s);
  state.owed_s[lane] -= paid;
  return 1.0 + paid / inputs.duration_s;
}

// Fills state.conditions for every lane; returns the notes of the nominal lane.
std::uint32_t GasCarburizing::set_conditions(State& state, const IntervalInputs& inputs,
                                             std::span<const double> part_degc) const {
  std::uint32_t notes = 0;
  for (std::size_t lane = 0; lane < lanes(); ++lane) {
    const Member& member = members_[lane];
    const double t_k = kelvin(part_degc[lane]);
    LaneConditions& c = state.conditions[lane];
    const double pace = member_pace(state, inputs, lane, part_degc[lane]);
    c.diffusivity =
        diffusivity_form(part_.law, t_k, std::max(1.0, pace) * diffusivity_factor_ * member.diffusivity_scale,
                         part_.constant_diffusivity_m2_s);
    if (lane == 0) {
      const TemperatureRange range = diffusivity_range(part_.law);
      if (t_k < range.low_k || t_k > range.high_k) notes |= note_outside_diffusivity_range;
    }
    if (!inputs.gas) {
      c.surface = {part_.core_carbon_wt_pct, std::numeric_limits<double>::infinity(), 0.0};
      continue;
    }
    const double potential =
        std::max(0.0, inputs.carbon_potential_wt_pct + carbon_potential_error_wt_pct(member, inputs.doubt));
    // Below the austenite range the limit has no meaning.
    const double limit = cementite_limit_wt_pct(std::max(t_k, kelvin(austenite_from_degc_)));
    const double equilibrium = potential / alloy_factor_;
    c.surface.equilibrium_wt_pct = std::min(equilibrium, limit);
    c.surface.resistance_s_per_m =
        1.0 / (pace * lane_beta_m_per_s(state, inputs, member, t_k) * alloy_factor_);
    c.surface.forced_wt_pct_m_per_s = 0.0;
    if (lane == 0) {
      if (equilibrium > limit) notes |= note_capped_at_carbide_limit;
      const double furnace_k = kelvin(inputs.furnace_temperature_degc);
      // Activity 1 is the graphite limit; its own inverse would cost as much as the step.
      if (carbon_activity(std::min(potential, 2.6), furnace_k) > 1.0) notes |= note_sooting_gas;
    }
  }
  return notes;
}

bool GasCarburizing::note_jump(State& state, const IntervalInputs& inputs, double part_degc) const {
  const bool jump =
      !state.moving || inputs.gas != state.in_gas ||
      (inputs.gas && std::fabs(inputs.carbon_potential_wt_pct - state.last_carbon_potential_wt_pct) >
                         jump_carbon_potential_wt_pct) ||
      std::fabs(part_degc - state.last_part_temperature_degc) > jump_temperature_k;
  if (inputs.gas) state.last_carbon_potential_wt_pct = inputs.carbon_potential_wt_pct;
  state.in_gas = inputs.gas;
  state.last_part_temperature_degc = part_degc;
  return jump;
}

Outcome GasCarburizing::advance(State& state, const IntervalInputs& inputs, Workspace& ws) const {
  // Asked of the inputs and not of the result: comparisons with NaN would quietly choose a branch.
  if (!computable(inputs)) state.failed = true;
  if (state.failed) return {OutcomeKind::failed, 0};
  const double dt = inputs.duration_s;
  for (std::size_t lane = 0; lane < lanes(); ++lane) {
    const Member& member = members_[lane];
    const double error_k = temperature_error_k(member, inputs.doubt);
    if (inputs.load_temperature_degc) {
      ws.part_mean_degc_[lane] = ws.part_end_degc_[lane] =
          *inputs.load_temperature_degc + member.load_thermocouple_offset_k + error_k;
      continue;
    }
    const double furnace = inputs.furnace_temperature_degc + member.thermocouple_offset_k + error_k;
    const double lag = std::max(1e-3, part_.lag_s * member.lag_scale);
    const double behind = state.part_temperature_degc[lane] - furnace;
    const double decay = -std::expm1(-dt / lag);
    ws.part_end_degc_[lane] = furnace + behind * (1.0 - decay);
    ws.part_mean_degc_[lane] = furnace + behind * decay * lag / dt;
  }
  std::copy(ws.part_end_degc_.begin(), ws.part_end_degc_.end(), state.part_temperature_degc.begin());

  if (!(ws.part_mean_degc_[0] > austenite_from_degc_)) {
    state.moving = false;
    for (std::size_t lane = 1; lane < lanes(); ++lane)
      if (inputs.gas && ws.part_mean_degc_[lane] > austenite_from_degc_) state.owed_s[lane] += dt;
    for (LaneConditions& c : state.conditions) {
      c.surface = {0.0, std::numeric_limits<double>::infinity(), 0.0};
    }
    return {OutcomeKind::reached_with_note, note_paused_below_austenite};
  }

  std::copy(state.conditions.begin(), state.conditions.end(), ws.good_conditions_.begin());
  const std::uint32_t notes = set_conditions(state, inputs, ws.part_mean_degc_);
  if (note_jump(state, inputs, ws.part_mean_degc_[0])) state.settled_s = 0.0;
  state.moving = true;

  std::copy(state.field.values.begin(), state.field.values.end(), ws.good_values_.begin());
  std::copy(state.field.crossed_wt_pct_m.begin(), state.field.crossed_wt_pct_m.end(),
            ws.good_crossed_.begin());
  double done = 0.0;
  while (done < dt) {
    const double left = dt - done;
    const SettlingStep step = settling_step(state.settled_s + done, left);
    ws.stepper_.step(state.field, state.conditions, step.duration_s, step.damped);
    done = step.duration_s < left ? done + step.duration_s : dt;
  }
  state.settled_s += dt;
  if (inputs.gas) state.film_age_s += dt;

  const bool finite = std::all_of(state.field.crossed_wt_pct_m.begin(), state.field.crossed_wt_pct_m.end(),
                                  [](double crossed) { return std::isfinite(crossed); });
  if (!finite) {
    std::copy(ws.good_conditions_.begin(), ws.good_conditions_.end(), state.conditions.begin());
    std::copy(ws.good_values_.begin(), ws.good_values_.end(), state.field.values.begin());
    std::copy(ws.good_crossed_.begin(), ws.good_crossed_.end(), state.field.crossed_wt_pct_m.begin());
    state.failed = true;
    return {OutcomeKind::failed, notes};
  }
  if (notes & note_outside_diffusivity_range) return {OutcomeKind::outside_range, notes};
  return {notes ? OutcomeKind::reached_with_note : OutcomeKind::reached, notes};
}

double expected_diffusion_length_m(DiffusivityLaw law, std::span<const TimeAtTemperature> pieces) {
  constexpr double mid_case_wt_pct = 0.6;
  double sum = 0.0;
  for (const TimeAtTemperature& piece : pieces) {
    const DiffusivityForm form = diffusivity_form(law, kelvin(piece.temperature_degc), 1.0);
    sum += diffusivity_m2_s(form, mid_case_wt_pct) * piece.duration_s;
  }
  return std::max(1e-4, 2.0 * std::sqrt(sum));
}

}  // namespace hearthfront::solver
