// Hardness of a hardened case at one carbon content: martensite (hardness.h), less what a temper takes
// (tempering.h), mixed with the retained austenite a quench leaves (martensite.h) by volume:
//   HV = (1 - f) (HV_martensite - drop) + f HV_austenite.
// HV_austenite 225 (200-250, from memory). The martensite share is that of the transformation during the
// quench, the same for the whole case: a case is taken as fully martensitic (99 %) unless told otherwise. Not
// in it: intergranular oxidation (the first 20-30 um of a gas-carburized case are softer), carbides, bainite.
// The measured martensite table (to 0.60 wt% C) holds the austenite of its own steels, so none is counted up
// to there; the plateau from 0.80 on is martensite alone, so all of it is; in between the share rises
// straight. A drawing's limit at 0.3-0.5 wt% C is therefore read off the table alone. Leave the quench
// temperature empty to count none at all.
#pragma once

#include <optional>

#include "solver/material/steel.h"
#include "solver/material/tempering.h"

namespace hearthfront::solver {

inline constexpr double austenite_hardness_hv = 225.0;

struct HardnessTreatment {
  double martensite_pct = 99;                            // 50-99
  std::optional<double> quench_temperature_degc = 20.0;  // the lowest reached; empty: no austenite is counted
  std::optional<Tempering> tempering;                    // after the quench; must be in tempering.h's range
};

// Carbon 0.05-2 wt%. Throws std::invalid_argument where the tempering law does not reach.
double case_hardness_hv(double carbon_wt_pct, const Composition& steel, const HardnessTreatment& treatment);

// The lowest carbon content, 0.10-1.2 wt%, that reaches the limit; richer places may be softer again through
// retained austenite. Empty where none does, or where 0.10 wt% is already at the limit or harder.
std::optional<double> carbon_for_hardness_hv(double limit_hv, const Composition& steel,
                                             const HardnessTreatment& treatment);

}  // namespace hearthfront::solver
