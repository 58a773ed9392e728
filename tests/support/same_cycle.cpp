#include "support/same_cycle.h"

#include <algorithm>
#include <cmath>
#include <stdexcept>

namespace hearthfront::testing {
namespace {

ReferenceShape reference_shape(solver::Shape shape) {
  switch (shape) {
    case solver::Shape::plate:
      return ReferenceShape::plate;
    case solver::Shape::cylinder:
      return ReferenceShape::cylinder;
    case solver::Shape::bore:
      return ReferenceShape::bore;
    case solver::Shape::sphere:
      break;
  }
  throw std::invalid_argument("the reference has no sphere");
}

}  // namespace

ReferenceProblem reference_problem(const solver::CarburizingPart& part,
                                   const std::vector<solver::IntervalInputs>& inputs) {
  const solver::Composition& s = part.steel;
  // Gunnarson 1967; radiotracer data of 1976; the cementite line as a fit.
  const double k = std::pow(10.0, 0.055 * s.si_wt_pct - 0.013 * s.mn_wt_pct - 0.040 * s.cr_wt_pct +
                                      0.014 * s.ni_wt_pct - 0.013 * s.mo_wt_pct);
  ReferenceProblem problem;
  problem.shape = reference_shape(part.section.shape);
  problem.bore_radius_m = part.section.bore_radius_m;
  problem.core_wt_pct = part.core_carbon_wt_pct;
  problem.diffusivity_factor = 1.0 - 0.107 * s.cr_wt_pct;
  for (const solver::IntervalInputs& in : inputs) {
    const double hundreds = (in.load_temperature_degc.value() - 900.0) / 100.0;
    const double cap = 1.2276 + 0.2933 * hundreds + 0.01457 * hundreds * hundreds;
    problem.pieces.push_back({in.duration_s, in.load_temperature_degc.value() + 273.15,
                              std::min(in.carbon_potential_wt_pct / k, cap), part.beta_m_per_s.value() * k});
  }
  return problem;
}

double diffusion_length_m(const std::vector<solver::IntervalInputs>& inputs) {
  std::vector<solver::TimeAtTemperature> pieces;
  for (const solver::IntervalInputs& in : inputs)
    pieces.push_back({in.duration_s, in.load_temperature_degc.value()});
  return solver::expected_diffusion_length_m(solver::DiffusivityLaw::agren, pieces);
}

}  // namespace hearthfront::testing
