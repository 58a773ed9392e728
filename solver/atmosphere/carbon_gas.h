// From what is measured in the gas to its carbon potential, and how fast it gives carbon.
//
// Equilibrium CO = C + 1/2 O2: log10 K = -5910.5/T - 4.5558, a linear fit for 1073-1323 K (within 0.002) to
// the NASA polynomials of NASA TM-4513. Probe: Nernst's equation against dry air (20.95 % O2).
// Transfer coefficient: median of German practice tables for 900-950 degC (from memory) scaled by
// pCO pH2^0.5 (H. J. Grabke's rate law for the CO + H2 path); temperature ratio exp(-34900/(R T)) from
// textbook use (origin not verified), 1 at 940 degC. Expect a factor 1.4 (one sigma) around it.
#pragma once

namespace hearthfront::solver {

// Carbon activity of a gas from the probe's emf. emf 0-1400 mV, probe 970-1330 K, CO 0.01-0.5 atm.
double activity_from_probe(double emf_mv, double probe_temperature_k, double co_atm);

// The emf a gas of that activity gives; the inverse of activity_from_probe.
double emf_mv_from_activity(double activity, double probe_temperature_k, double co_atm);

// Carbon potential in wt% of plain iron in equilibrium with the gas at the probe.
double carbon_potential_from_probe(double emf_mv, double probe_temperature_k, double co_atm);

// beta of flux = beta (Cp - k C_s), m/s; mole fractions of the carrier gas 0.02-0.9.
double transfer_coefficient_m_per_s(double co_fraction, double h2_fraction, double temperature_k);

}  // namespace hearthfront::solver
