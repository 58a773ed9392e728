#include "solver/material/case_hardness.h"

#include <algorithm>
#include <stdexcept>

#include "solver/material/hardness.h"
#include "solver/material/martensite.h"

namespace hearthfront::solver {

namespace {

// How much of the austenite is not in the table of martensite already.
double counted_share(double carbon) {
  constexpr double table_ends = 0.60, plateau_begins = 0.80;
  return std::clamp((carbon - table_ends) / (plateau_begins - table_ends), 0.0, 1.0);
}

}  // namespace

double case_hardness_hv(double carbon, const Composition& steel, const HardnessTreatment& treatment) {
  double martensite = martensite_hardness_hv(carbon, treatment.martensite_pct);
  if (treatment.tempering) {
    const auto drop = tempering_drop(*treatment.tempering, carbon);
    if (!drop)
      throw std::invalid_argument(
          "no hardness after tempering outside 150-204 degC or 0.5-10 h is known here");
    martensite -= drop->hv;
  }
  if (!treatment.quench_temperature_degc) return martensite;
  const double f =
      counted_share(carbon) * retained_austenite_fraction(steel, carbon, *treatment.quench_temperature_degc);
  return (1.0 - f) * martensite + f * austenite_hardness_hv;
}

std::optional<double> carbon_for_hardness_hv(double limit_hv, const Composition& steel,
                                             const HardnessTreatment& treatment) {
  constexpr double leanest = 0.10, richest = 1.2, step = 0.005;
  const auto reaches = [&](double carbon) { return case_hardness_hv(carbon, steel, treatment) >= limit_hv; };
  if (reaches(leanest)) return std::nullopt;
  double low = leanest, high = leanest;
  do {
    low = high;
    high += step;
    if (high > richest) return std::nullopt;
  } while (!reaches(high));
  while (high - low > 1e-12) {
    const double middle = 0.5 * (low + high);
    (reaches(middle) ? high : low) = middle;
  }
  return 0.5 * (low + high);
}

}  // namespace hearthfront::solver
