// What alloy elements change, for low-alloy case-hardening steels (steel.h gives the range).
//
// alloy_factor_k: k = Cp / C of the steel in equilibrium with a gas of carbon potential Cp.
//   S. Gunnarson, Haerterei-Techn. Mitt. 22 (1967) 293 (constants from memory); 850-1000 degC, C 0.2-1.1.
// diffusivity_factor: D falls about 10.7 % for each wt% Cr (radiotracer data, Trans. JIM 17 (1976) 630,
//   abstract); other elements are taken as neutral since sources disagree even in sign. 0.75-1.1.
// The two must be used together: for Cr steels one alone is worse than neither (they nearly cancel).
// ae3_degc: austenite only above it. K. W. Andrews, JISI 203 (1965) 721, as quoted in handbooks; C < 0.6.
#pragma once

#include "solver/material/steel.h"

namespace hearthfront::solver {

double alloy_factor_k(const Composition& steel);
double diffusivity_factor(const Composition& steel);
double ae3_degc(const Composition& steel, double carbon_wt_pct);

}  // namespace hearthfront::solver
