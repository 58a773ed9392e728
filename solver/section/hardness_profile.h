// What a carbon profile becomes when it is quenched and tempered: retained austenite and hardness over depth,
// the depth at a hardness limit as a traverse is judged (ISO 18203: the depth where the hardness falls to the
// limit), and what grinding leaves of it. Depths in metres. The law of hardness is material/case_hardness.h.
#pragma once

#include <optional>
#include <vector>

#include "solver/material/case_hardness.h"
#include "solver/section/measures.h"

namespace hearthfront::solver {

// At the profile's own depths. Both throw as `case_hardness_hv` does.
std::vector<double> hardness_profile_hv(const Profile& profile, const Composition& steel,
                                        const HardnessTreatment& treatment);
std::vector<double> retained_austenite_profile(const Profile& profile, const Composition& steel,
                                               double lowest_quench_temperature_degc);

// Hardness at one depth, through the carbon there.
double hardness_at_depth_hv(const Profile& profile, double depth_m, const Composition& steel,
                            const HardnessTreatment& treatment);

// Where the hardness falls to the limit, read from the core outward (the deepest crossing): a surface made
// soft by retained austenite does not end the case. 0 where no place reaches the limit; empty where the core
// does. Equals depth_at_carbon_m at `carbon_for_hardness_hv`, as long as carbon falls with depth there.
std::optional<double> depth_at_hardness_m(const Profile& profile, double limit_hv, const Composition& steel,
                                          const HardnessTreatment& treatment);

// Depth that is left when `grinding_stock_m` is taken off the surface: what a drawing's window is about. Not
// below 0.
double finished_case_depth_m(double case_depth_m, double grinding_stock_m);

}  // namespace hearthfront::solver
