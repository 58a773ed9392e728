// Physical constants. CODATA 2018; atomic masses IUPAC standard values.
#pragma once

namespace hearthfront::solver {

inline constexpr double gas_constant_j_mol_k = 8.314463;
inline constexpr double molar_mass_carbon = 12.011;
inline constexpr double molar_mass_iron = 55.845;
inline constexpr double zero_celsius_k = 273.15;
// Austenite near 930 degC; used only to state carbon taken up in g/m2 (from memory, handbook order).
inline constexpr double austenite_density_kg_m3 = 7600.0;

}  // namespace hearthfront::solver
