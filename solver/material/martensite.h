// Start of martensite and the austenite that a quench leaves, of a case at one carbon content. `steel` gives
// the alloy elements (steel.h gives their range); `carbon_wt_pct` is that of the place in the case.
//
// Ms: S. M. C. van Bohemen, Mater. Sci. Technol. 28 (2012) 487, as quoted in compilations of Ms formulas, to
//   about 1.9 wt% C: the linear formulas in use (K. W. Andrews; W. Steven, A. G. Haynes; both for C < 0.6)
//   give far too low an Ms in a case. Their values stand beside it in sources.h.
// Retained austenite: D. P. Koistinen, R. E. Marburger, Acta Metall. 7 (1959) 59:
//   exp(-0.011 (Ms - lowest quench temperature)). Cooling below room temperature counts; stabilising by a
//   slow or interrupted quench and what tempering decomposes do not.
// Expect 0.03-0.10 (absolute) between sources at 0.8-1.0 wt% C.
#pragma once

#include "solver/material/steel.h"

namespace hearthfront::solver {

inline constexpr double martensite_start_highest_carbon_wt_pct = 1.9;

double martensite_start_degc(const Composition& steel, double carbon_wt_pct);

// Volume fraction 0-1; 1 where the quench ends above Ms. lowest_quench_temperature_degc from -196 to 250.
double retained_austenite_fraction(const Composition& steel, double carbon_wt_pct,
                                   double lowest_quench_temperature_degc);

}  // namespace hearthfront::solver
