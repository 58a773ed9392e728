// Diffusivity of carbon in austenite, D(C, T) in m2/s, C in weight percent, T in kelvin.
//
// Sources:
//   agren     J. Agren, Scripta Metall. 20 (1986) 1507; 1000-1600 K, to about the solubility limit. Default.
//   tibbetts  G. G. Tibbetts, J. Appl. Phys. 51 (1980) 4813 (constants from memory, numerically consistent
//             with agren within 10 %); about 1073-1323 K, C <= 1.3.
//   constant  a given D, for comparison with exact solutions.
#pragma once

namespace hearthfront::solver {

enum class DiffusivityLaw { agren, tibbetts, constant };

// All laws in one form, so that the step kernel has no branch: with z = rise * C / (1 - fold * C),
//   D = scale * (1 + hump * z * (1 - z)) * exp(exponent + slope * z).
struct DiffusivityForm {
  double rise = 1, fold = 0, hump = 0, scale = 0, exponent = 0, slope = 0;
};

// `factor` multiplies D: the alloy factor times a furnace's or member's own scale (0.2-5).
// `constant_m2_s` is used by the constant law only.
DiffusivityForm diffusivity_form(DiffusivityLaw law, double temperature_k, double factor = 1.0,
                                 double constant_m2_s = 0.0);

double diffusivity_m2_s(const DiffusivityForm& form, double carbon_wt_pct);

// The range of temperature in which a law was stated.
struct TemperatureRange {
  double low_k, high_k;
};
TemperatureRange diffusivity_range(DiffusivityLaw law);

}  // namespace hearthfront::solver
