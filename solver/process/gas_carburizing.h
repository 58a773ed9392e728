// Gas carburizing of one part: surface flux beta (Cp - k C_s) into a steel whose diffusivity follows
// carbon and temperature, from a logged furnace temperature (or load thermocouple) and carbon potential.
//
// The model is immutable and may be shared by threads; State is a value (copying it sets a mark);
// a Workspace belongs to one thread. advance() never throws, allocates or blocks.
//
// Outside any carburizing gas (vacuum, nitrogen, a move between furnaces) nothing crosses the surface and
// carbon goes on spreading; oxidation and decarburizing by air are not modelled. A film left on the surface
// (oxide, washing residue) makes a slow start: beta (1 - exp(-t/film_s)), a suggestion of practice without a
// published law; t counts the time in gas as austenite and each interval takes its mean. Below the austenite
// range of the core (Andrews' Ae3) the section is not single-phase austenite: carbon transport is paused and
// the outcome says so. A gas above the cementite limit of the steel is capped there, and noted. Temperatures
// outside the range of the diffusivity law are still computed with it, and noted as outside. Part
// temperature: the load thermocouple where given, else a first-order lag behind the furnace (lumped body,
// textbook heat transfer), advanced exactly over the interval.
#pragma once

#include <cstdint>
#include <memory>
#include <optional>
#include <vector>

#include "solver/diffusion/field.h"
#include "solver/material/steel.h"
#include "solver/section/measures.h"

namespace hearthfront::solver {

struct CarburizingPart {
  Section section;
  Composition steel;
  double core_carbon_wt_pct = 0.2;  // 0.02-0.6
  double lag_s = 1200;              // time constant of the part behind the furnace, 0-36000
  DiffusivityLaw law = DiffusivityLaw::agren;
  double constant_diffusivity_m2_s = 0;  // for DiffusivityLaw::constant only
  // Overrides the value from the gas: beta in the gas of the next line. A measured gas scales it
  // (transfer_ratio).
  std::optional<double> beta_m_per_s;
  double co_fraction = 0.20, h2_fraction = 0.40;  // where no gas is measured
  double film_s = 0;                              // time constant of a slow start, 0-7200; 0: none
};

// How one ensemble member departs from the nominal part and furnace. Lane 0 is the nominal one: pauses,
// jumps and therefore step sizes are decided on it alone. Offsets are what is true minus what is read.
struct Member {
  double diffusivity_scale = 1, beta_scale = 1, lag_scale = 1;
  double temperature_offset_k = 0, carbon_potential_offset_wt_pct = 0, core_carbon_offset_wt_pct = 0;
  double film_scale = 1;
  // Of the furnace's couple: it enters the part's temperature and, by InputDoubt::carbon_potential_per_k, the
  // carbon potential. The load couple's enters the part's temperature alone.
  double thermocouple_offset_k = 0, load_thermocouple_offset_k = 0;
  // In standard deviations of what InputDoubt says of the interval.
  double carbon_source_error = 0, temperature_gap_error = 0, carbon_potential_gap_error = 0;
  double future_temperature_error = 0, future_carbon_potential_error = 0;
};

// How far an interval's inputs may be from the truth; each member has its own share of it. All >= 0 but the
// first.
struct InputDoubt {
  // Change of the carbon potential with the temperature it was computed at, the instrument's own reading
  // held.
  double carbon_potential_per_k = 0;
  double carbon_source_sd_wt_pct = 0;                                         // of the instrument
  double temperature_gap_sd_k = 0, carbon_potential_gap_sd_wt_pct = 0;        // nothing measured
  double future_temperature_sd_k = 0, future_carbon_potential_sd_wt_pct = 0;  // not yet there
};

// Settings of a furnace, as in CarburizingPart.
struct FurnaceSettings {
  std::optional<double> beta_m_per_s;
  double co_fraction = 0.20, h2_fraction = 0.40;
};

// Means over one lattice interval. A value that is not finite, a mole fraction outside 0-1, or a duration
// that is not above 0, fails the state.
struct IntervalInputs {
  double duration_s = 60;
  double furnace_temperature_degc = 20;
  std::optional<double> load_temperature_degc;
  double carbon_potential_wt_pct = 0;
  // Measured gas, 0-1; where empty the furnace's.
  std::optional<double> co_fraction, h2_fraction;
  // The furnace the part is in, where it is another than the part's own (a load that moved).
  std::optional<FurnaceSettings> furnace;
  InputDoubt doubt;
  // False: the part is outside any carburizing gas; potential and fractions are then not looked at.
  bool gas = true;
};

// The closed list of outcomes. Negative: the state stays at the farthest good point.
enum class OutcomeKind : int { failed = -1, reached = 0, reached_with_note = 1, outside_range = 2 };

enum Note : std::uint32_t {
  note_paused_below_austenite = 1,
  note_capped_at_carbide_limit = 2,
  note_sooting_gas = 4,
  note_outside_diffusivity_range = 8,
};

struct Outcome {
  OutcomeKind kind = OutcomeKind::reached;
  std::uint32_t notes = 0;  // Note bits
};

class GasCarburizing {
 public:
  struct State {
    CarbonField field;
    std::vector<double> part_temperature_degc;  // each lane, at the end of the last interval
    std::vector<LaneConditions> conditions;     // each lane, of the last interval
    std::vector<double> owed_s;                 // each lane: as austenite while the nominal one was not
    std::vector<double> initial_wt_pct_m;       // inventory at the start
    double settled_s = 0;                       // since the last jump of the inputs
    double last_carbon_potential_wt_pct = 0, last_part_temperature_degc = 0;
    double film_age_s = 0;  // time in gas as austenite
    bool in_gas = false;    // in the last interval that moved
    bool moving = false;    // false at the start and while paused
    bool failed = false;
  };

  class Workspace {
   public:
    explicit Workspace(const GasCarburizing& model);
    const WorkCounters& work() const { return stepper_.work(); }

   private:
    friend class GasCarburizing;
    DiffusionStepper stepper_;
    std::vector<double> part_mean_degc_, part_end_degc_, good_values_, good_crossed_;
    std::vector<LaneConditions> good_conditions_;
  };

  // Throws std::invalid_argument where the section is outside its range.
  GasCarburizing(const CarburizingPart& part, const MeshDensity& density,
                 std::vector<Member> members = {Member{}});

  // A new part: core carbon everywhere.
  State start(double charge_temperature_degc) const;
  // Rework: a part that an earlier load left with `initial`. The section must be the same; core carbon is the
  // profile's own. Lay the mesh out for both loads: the root of the sum of their squared diffusion lengths.
  // A profile on this model's nodes is taken over bit for bit. Any other is read at this model's nodes by
  // `carbon_at_depth_wt_pct`: depths within 0.3 um, and the carbon inside (a quadrature over each mesh's own
  // nodes) within 3e-4 of what the profile holds above its core (tests); it is the start of this load's
  // balance. Throws std::invalid_argument where the profile has fewer than four depths, does not ascend from
  // the surface to this section's centre (within 5 % of its extent), or holds carbon outside 0-2.6 wt%.
  State start(double charge_temperature_degc, const Profile& initial) const;
  Outcome advance(State& state, const IntervalInputs& inputs, Workspace& workspace) const;

  // One lane by itself: the same model with that member alone, on the same mesh, and its state.
  GasCarburizing lane_alone(std::size_t lane) const;
  State lane_alone(const State& state, std::size_t lane) const;

  const Mesh& mesh() const { return *mesh_; }
  const CarburizingPart& part() const { return part_; }
  double alloy_factor() const { return alloy_factor_; }
  std::size_t lanes() const { return members_.size(); }

 private:
  template <class CarbonAtNode>
  State start_from(double charge_temperature_degc, CarbonAtNode carbon_at) const;
  double lane_beta_m_per_s(const State& state, const IntervalInputs& inputs, const Member& member,
                           double temperature_k) const;
  double member_pace(State& state, const IntervalInputs& inputs, std::size_t lane, double part_degc) const;
  std::uint32_t set_conditions(State& state, const IntervalInputs& inputs,
                               std::span<const double> part_degc) const;
  bool note_jump(State& state, const IntervalInputs& inputs, double part_degc) const;

  CarburizingPart part_;
  std::vector<Member> members_;
  std::shared_ptr<const Mesh> mesh_;
  double alloy_factor_, diffusivity_factor_, austenite_from_degc_;
};

// 2 sqrt(int D dt) over pieces of constant temperature at mid-case carbon (0.6 wt%): the length a mesh is
// laid out for. At least 0.1 mm.
struct TimeAtTemperature {
  double duration_s, temperature_degc;
};
double expected_diffusion_length_m(DiffusivityLaw law, std::span<const TimeAtTemperature> pieces);

}  // namespace hearthfront::solver
