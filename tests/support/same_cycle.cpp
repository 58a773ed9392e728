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
  // Andrews 1965: nothing moves below it.
  const double ae3_degc = 910.0 - 203.0 * std::sqrt(part.core_carbon_wt_pct) + 44.7 * s.si_wt_pct -
                          15.2 * s.ni_wt_pct + 31.5 * s.mo_wt_pct - 30.0 * s.mn_wt_pct - 11.0 * s.cr_wt_pct;
  double film_age_s = 0;
  for (const solver::IntervalInputs& in : inputs) {
    const double degc = in.load_temperature_degc.value();
    if (!(degc > ae3_degc)) continue;
    const double hundreds = (degc - 900.0) / 100.0;
    const double cap = 1.2276 + 0.2933 * hundreds + 0.01457 * hundreds * hundreds;
    const double gas = in.co_fraction.value_or(part.co_fraction) *
                       std::sqrt(in.h2_fraction.value_or(part.h2_fraction)) /
                       (part.co_fraction * std::sqrt(part.h2_fraction));
    ReferencePiece piece{in.duration_s, degc + 273.15, std::min(in.carbon_potential_wt_pct / k, cap),
                         in.gas ? part.beta_m_per_s.value() * gas * k : 0.0};
    // A film follows time, not intervals: while it matters, in pieces of a sixth at their middles.
    const bool filmed = in.gas && part.film_s > 0 && film_age_s < 12 * part.film_s;
    const int cuts = filmed ? 6 : 1;
    piece.duration_s /= cuts;
    const double clean = piece.transfer_m_per_s;
    for (int i = 0; i < cuts; ++i) {
      if (filmed)
        piece.transfer_m_per_s =
            clean * -std::expm1(-(film_age_s + (i + 0.5) * piece.duration_s) / part.film_s);
      problem.pieces.push_back(piece);
    }
    if (in.gas) film_age_s += in.duration_s;
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
