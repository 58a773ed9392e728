// As-quenched hardness of martensite from its carbon content, and between HRC and HV.
//
// Sources: J. M. Hodge, M. A. Orehoski, Trans. AIME 167 (1946) 627, hardness against carbon at 50, 80, 90,
// 95 and 99 % martensite (the 99 column is labelled 99.9 in the original), C 0.10-0.60 (values from
// memory); ASTM E140 table 1 for HRC 20-65 (38 and below from memory). Converted hardness values are
// approximate, as the standard itself says. Retained austenite and tempering are not in these numbers.
#pragma once

#include <optional>

namespace hearthfront::solver {

// HRC 20-65 <-> HV 238-832, linear between the table's points. Empty outside.
std::optional<double> hv_from_hrc(double hrc);
std::optional<double> hrc_from_hv(double hv);

// carbon 0.10-0.60 wt%, martensite 50-99 %. Outside the carbon range the end value holds (a plateau above
// 0.60 %C is what the data show).
double martensite_hardness_hrc(double carbon_wt_pct, double martensite_pct);

// The carbon content whose martensite has that hardness. Empty where the table does not reach it.
std::optional<double> carbon_for_hardness_hrc(double hrc, double martensite_pct);

}  // namespace hearthfront::solver
