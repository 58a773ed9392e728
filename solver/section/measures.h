// What is read off a carbon profile: depths at a carbon content, surface carbon, total depth, turnover
// depth, carbon taken up, balance residual. Depths in metres, contents in wt%.
//
// Case depth is read from the core outward (the deepest crossing), as a hardness traverse is judged: a
// surface that has given carbon up does not end the case. Depths come from a cubic through the four
// nearest nodes; on the shipped mesh they are within 0.2 um of a converged profile (tests).
#pragma once

#include <optional>
#include <span>
#include <vector>

#include "solver/diffusion/field.h"

namespace hearthfront::solver {

struct Profile {
  std::vector<double> depth_m;  // the nodes, ascending from 0 (the surface); at least four
  std::vector<double> carbon_wt_pct;
};
Profile read_profile(const CarbonField& field, std::size_t lane, const LaneConditions& conditions);

// Where the profile falls to `limit`. 0 where even the richest point is below it; empty where the core is
// above it, so that the criterion has no meaning.
std::optional<double> depth_at_carbon_m(const Profile& profile, double limit_wt_pct);

// Carbon at one depth, by a cubic through the four nearest nodes that is kept within their values. At the end
// nodes and beyond them their own values.
double carbon_at_depth_wt_pct(const Profile& profile, double depth_m);

// Depth where the steel changes from giving carbon up (nearer the surface) to gaining it: the sign change of
// the flux divergence. Empty while the metal near the surface gains.
std::optional<double> turnover_depth_m(const CarbonField& field, std::size_t lane,
                                       const LaneConditions& conditions);

// Carbon that crossed the surface, g/m2, with the density of austenite (constants.h).
double carbon_uptake_g_m2(const CarbonField& field, std::size_t lane);

// (inside now - inside at the start - crossed) / max(|crossed|, inside at the start): round-off only.
double balance_residual(const CarbonField& field, std::size_t lane, double initial_wt_pct_m);

// SAE J423's chemical criterion as commonly used: total depth ends at core + 0.04 wt%.
inline constexpr double total_depth_above_core_wt_pct = 0.04;

}  // namespace hearthfront::solver
