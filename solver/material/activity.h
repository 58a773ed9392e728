// Carbon activity in austenite (graphite = 1) and the limits of solubility in plain iron.
// Sources: P. Gustafson, Scand. J. Metall. 14 (1985) 259 for the activity; the cementite line is a fit,
// good to 0.0013 wt% at 800-1050 degC, to the same description with SGTE lattice stabilities and a
// cementite free energy (from memory). Both are for iron and carbon; alloy enters by alloy.h.
#pragma once

namespace hearthfront::solver {

// carbon 0.001-2.6 wt%, temperature 1000-1430 K.
double carbon_activity(double carbon_wt_pct, double temperature_k);

// The carbon content of plain iron with that activity: the carbon potential of a gas. Monotone; found to
// 1e-12. Activities beyond the range of `carbon_activity` give its end values (0.001 or 2.6).
double carbon_at_activity(double activity, double temperature_k);

// Carbon potential at which graphite (soot) is stable: activity 1.
double graphite_limit_wt_pct(double temperature_k);

// Solubility limit against cementite; a steel surface takes up no more.
double cementite_limit_wt_pct(double temperature_k);

}  // namespace hearthfront::solver
