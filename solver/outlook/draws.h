// How uncertain a load is before any coupon: priors of one furnace and its parts, and members drawn from
// them. One sigma unless "half width" says that the error is taken as rectangular within +/- it.
//
// Lane 0 of every ensemble is the nominal part and furnace: step sizes and pauses are decided on it, and it
// is no member of the statistics. Furnace-level draws (thermocouple, carbon source, beta, diffusivity, what
// happens in gaps and from now on) are the same for all items of a load; lag, position, core carbon, film and
// hardness criterion are each item's own. Furnace level: a rank-1 lattice (N. M. Korobov, Dokl. Akad. Nauk
// SSSR 124 (1959) 1207) shifted by a random vector (R. Cranley, T. N. L. Patterson, SIAM J. Numer. Anal. 13
// (1976) 904). Item level: Latin hypercube (M. D. McKay et al., Technometrics 21 (1979) 239).
#pragma once

#include <cstddef>
#include <cstdint>
#include <vector>

#include "solver/process/gas_carburizing.h"

namespace hearthfront::solver {

struct Priors {
  // IEC 60584-1: a K or N thermocouple of class 1 is allowed 0.4 %, 3.7 K at 930 degC.
  double thermocouple_half_width_k = 3.7;
  // Position in the chamber; SAE AMS 2750F, class 2 (+/- 6 K). Rectangular for a part of unknown position.
  double uniformity_half_width_k = 6;
  double beta_sd_ln = 0.34;                     // scatter of published transfer coefficients
  double diffusivity_sd_ln = 0.05;              // published laws against one another, 850-980 degC
  double lag_sd_ln = 0.25;                      // common practice, no source
  double film_sd_ln = 0.4;                      // common practice, no source
  double core_carbon_half_width_wt_pct = 0.02;  // heats within a steel's range after a mill certificate
  double criterion_sd_wt_pct = 0.02;  // carbon at a hardness limit; 0 where the drawing names the carbon
  // What a furnace under control does from now on, beside what it shows now; common practice, no source.
  double future_temperature_sd_k = 2;
  double future_carbon_potential_sd_wt_pct = 0.015;
};

inline constexpr std::size_t ensemble_members = 127;     // with the nominal lane 16 blocks of 8
inline constexpr std::size_t confirming_members = 1031;  // with the nominal lane 129 blocks

struct ItemPriors {
  bool hardness_criterion = true;
};

// Lanes of one item: `lanes` for GasCarburizing (the nominal first), and what each adds to the carbon content
// its case depth is read at.
struct ItemDraws {
  std::vector<Member> lanes;
  std::vector<double> criterion_offset_wt_pct;
};

// One entry for each item. `members` must be ensemble_members or confirming_members, else
// std::invalid_argument. The same seed gives the same members; item i's do not depend on how many items
// follow it.
std::vector<ItemDraws> draw_members(const Priors& priors, const std::vector<ItemPriors>& items,
                                    std::uint64_t seed, std::size_t members = ensemble_members);

// One truth from the same priors, by plain random numbers: for tests of coverage. Entry i: item i's member,
// with its criterion offset.
struct TrueMember {
  Member member;
  double criterion_offset_wt_pct = 0;
};
std::vector<TrueMember> draw_truth(const Priors& priors, const std::vector<ItemPriors>& items,
                                   std::uint64_t seed);

// How much less is known about an input the longer nothing was measured: one sigma after `gap_s` seconds
// without a reading; common practice, no source. They grow with the root of time up to a bound.
double temperature_gap_sd_k(double gap_s);
double carbon_potential_gap_sd_wt_pct(double gap_s);

}  // namespace hearthfront::solver
