// Running the shipped solver beside an exact solution: minute intervals, shipped mesh defaults laid out for
// the test's whole time, shipped step rule.
#pragma once

#include <cmath>
#include <memory>

#include "solver/solver.h"
#include "support/cycles.h"

namespace hearthfront::testing {

inline constexpr double core_wt_pct = 0.20;
inline constexpr double d_constant = 2e-11;  // m2/s

// exp(x^2) erfc(x), x >= 0.
inline double erfcx(double x) {
  if (x < 20.0) return std::exp(x * x) * std::erfc(x);
  const double s = 1.0 / (2.0 * x * x);
  return (1.0 - s + 3.0 * s * s - 15.0 * s * s * s) / (x * std::sqrt(M_PI));
}

inline solver::MeshDensity density_for(double length_m) {
  solver::MeshDensity density;
  density.diffusion_length_m = length_m;
  return density;
}

// Unalloyed steel at 930 degC (k = 1) in gas of `carbon_potential`, through GasCarburizing. After each minute
// `check(t_s, mesh, field, conditions)`.
template <class Check>
void carburize(const solver::CarburizingPart& part, double length_m, double carbon_potential,
               double duration_s, Check check) {
  const solver::GasCarburizing model(part, density_for(length_m));
  solver::GasCarburizing::Workspace workspace(model);
  solver::GasCarburizing::State state = model.start(930);
  double t = 0;
  for (const solver::IntervalInputs& in : constant_inputs(duration_s, 930, carbon_potential)) {
    model.advance(state, in, workspace);
    t += in.duration_s;
    check(t, model.mesh(), state.field, state.conditions[0]);
  }
}

// The same for any surface condition and starting field, through the stepper and the shipped step rule.
template <class Check>
void diffuse(solver::CarbonField& field, const solver::LaneConditions& conditions, double duration_s,
             Check check) {
  solver::DiffusionStepper stepper(field.mesh->nodes(), 1);
  for (double t = 0; t < duration_s - 1e-6;) {
    for (double done = 0; done < 60.0;) {
      const double left = 60.0 - done;
      const solver::SettlingStep step = solver::settling_step(t + done, left);
      stepper.step(field, {&conditions, 1}, step.duration_s, step.damped);
      done = step.duration_s < left ? done + step.duration_s : 60.0;
    }
    t += 60.0;
    check(t);
  }
}

inline solver::CarburizingPart constant_part(solver::Section section, double beta_m_per_s) {
  solver::CarburizingPart part;
  part.section = section;
  part.core_carbon_wt_pct = core_wt_pct;
  part.law = solver::DiffusivityLaw::constant;
  part.constant_diffusivity_m2_s = d_constant;
  part.beta_m_per_s = beta_m_per_s;
  return part;
}

inline solver::LaneConditions constant_conditions(double equilibrium, double resistance, double forced) {
  solver::LaneConditions conditions;
  conditions.diffusivity =
      solver::diffusivity_form(solver::DiffusivityLaw::constant, 1203.15, 1.0, d_constant);
  conditions.surface = {equilibrium, resistance, forced};
  return conditions;
}

}  // namespace hearthfront::testing
