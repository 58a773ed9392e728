// What other published sources give for a quantity, beside the program's own choice: for display, so that a
// reader sees how far apart they are. The first entry is always what the program computes with.
#pragma once

#include <array>

#include "solver/material/steel.h"

namespace hearthfront::solver {

struct SourceValue {
  const char* source;  // author and year
  double value;
  bool in_stated_range;  // false: the source does not claim the place asked for
};

// D of unalloyed austenite, m2/s. Agren 1986; Tibbetts 1980; S. J. Lee, D. K. Matlock, C. J. Van Tyne, ISIJ
// Int. 51 (2011) 1903, its Fe-C part; J. Slycke, T. Ericsson, J. Heat Treating 2 (1981); C. Wells, R. F.
// Mehl, Trans. AIME 140 (1940) 279; C. A. Stickels, ASM Handbook vol. 4, one D for every carbon content. All
// but the first from memory.
std::array<SourceValue, 6> diffusivity_by_source(double carbon_wt_pct, double temperature_k);

// Activity, graphite = 1. Gustafson 1985; T. Ellis, I. M. Davidson, C. Bodsworth, JISI 201 (1963) 582, C
// to 1.3; S. Ban-ya, J. F. Elliott, J. Chipman, Metall. Trans. 1 (1970) 1313. The last two from memory.
std::array<SourceValue, 3> carbon_activity_by_source(double carbon_wt_pct, double temperature_k);

// Carbon potential of a gas of that activity (0.01-1.1), by the same three.
std::array<SourceValue, 3> carbon_potential_by_source(double activity, double temperature_k);

// k = Cp / C. Gunnarson 1967; F. Neumann, B. Person, Haerterei-Techn. Mitt. 23 (1968) 296 (from memory, with
// the nickel term 0.03 + 0.00365 Ni: the widely copied 0.03 - 0.03365 Ni would have nickel lower the
// activity).
std::array<SourceValue, 2> alloy_factor_by_source(const Composition& steel);

// Ms, degC. van Bohemen 2012; K. W. Andrews, JISI 203 (1965) 721, linear; W. Steven, A. G. Haynes, JISI 183
// (1956) 349; C. Capdevila, F. G. Caballero, C. Garcia de Andres, ISIJ Int. 42 (2002) 894. As quoted in
// compilations; the linear formulas are for C < 0.6.
std::array<SourceValue, 4> martensite_start_by_source(const Composition& steel, double carbon_wt_pct);

// Retained austenite, 0-1. Koistinen and Marburger 1959 with Ms by van Bohemen; the same with Ms by Andrews;
// van Bohemen 2012 with a rate of its own in place of 0.011 (from memory).
std::array<SourceValue, 3> retained_austenite_by_source(const Composition& steel, double carbon_wt_pct,
                                                        double lowest_quench_temperature_degc);

}  // namespace hearthfront::solver
