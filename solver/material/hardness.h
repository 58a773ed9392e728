// As-quenched hardness of martensite from its carbon content, and between HRC and HV.
//
// Sources: J. M. Hodge, M. A. Orehoski, Trans. AIME 167 (1946) 627, hardness against carbon at 50, 80, 90,
// 95 and 99 % martensite (the 99 column is labelled 99.9 in the original), C 0.10-0.60 (values from
// memory); ASTM E140 table 1 for HRC 20-68 (38 and below, 66 and above from memory). Converted hardness
// values are approximate, as the standard itself says. Retained austenite and tempering are not in these
// numbers: case_hardness.h adds them.
//
// Above 0.60 wt% C martensite itself hardly hardens further: 65-66 HRC. In HV here a straight rise from the
// table's 0.60 wt% to 865 HV (66 HRC) at 0.80, then a plateau; compilations of G. Krauss and of L. D. Jaffe
// and E. Gordon scatter over 830-920 HV at 0.8 wt% C (from memory).
#pragma once

#include <optional>

namespace hearthfront::solver {

// HRC 20-68 <-> HV 238-940, linear between the table's points. Empty outside.
std::optional<double> hv_from_hrc(double hrc);
std::optional<double> hrc_from_hv(double hv);

// Table alone: carbon 0.10-0.60 wt%, martensite 50-99 %. Outside the end value holds.
double martensite_hardness_hrc(double carbon_wt_pct, double martensite_pct);

// In HV, with the rise above 0.60 wt% C; other shares of martensite keep their ratio to 99 % there.
double martensite_hardness_hv(double carbon_wt_pct, double martensite_pct);

// The carbon content whose martensite has that hardness by the table. Empty where it does not reach so far.
std::optional<double> carbon_for_hardness_hrc(double hrc, double martensite_pct);

}  // namespace hearthfront::solver
