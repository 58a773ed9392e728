#include "solver/material/diffusivity.h"

#include <cmath>

#include "solver/material/constants.h"

namespace hearthfront::solver {

DiffusivityForm diffusivity_form(DiffusivityLaw law, double temperature_k, double factor,
                                 double constant_m2_s) {
  DiffusivityForm form;
  switch (law) {
    case DiffusivityLaw::agren: {
      // y = x/(1-x) = (M_Fe/M_C) C/(100-C): carbon atoms for each iron atom.
      const double inverse = 1.0 / temperature_k - 2.221e-4;
      form.rise = molar_mass_iron / molar_mass_carbon / 100.0;
      form.fold = 0.01;
      form.hump = 8339.9 / temperature_k;
      form.scale = 4.53e-7 * factor;
      form.exponent = -17767.0 * inverse;
      form.slope = 26436.0 * inverse;
      break;
    }
    case DiffusivityLaw::tibbetts: {
      constexpr double gas_constant_cal = 1.987;  // the paper's unit is cal/mol
      form.scale = 0.47e-4 * factor;
      form.exponent = -37000.0 / (gas_constant_cal * temperature_k);
      form.slope = 6600.0 / (gas_constant_cal * temperature_k) - 1.6;
      break;
    }
    case DiffusivityLaw::constant:
      form.scale = constant_m2_s * factor;
      break;
  }
  return form;
}

double diffusivity_m2_s(const DiffusivityForm& form, double carbon_wt_pct) {
  const double z = form.rise * carbon_wt_pct / (1.0 - form.fold * carbon_wt_pct);
  return form.scale * (1.0 + form.hump * z * (1.0 - z)) * std::exp(form.exponent + form.slope * z);
}

TemperatureRange diffusivity_range(DiffusivityLaw law) {
  switch (law) {
    case DiffusivityLaw::agren:
      return {1000.0, 1600.0};
    case DiffusivityLaw::tibbetts:
      return {1073.15, 1323.15};
    case DiffusivityLaw::constant:
      break;
  }
  return {0.0, 1.0e4};
}

}  // namespace hearthfront::solver
