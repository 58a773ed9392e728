// What an oxygen probe reads in a carburizing gas: from carbon potential (wt%), CO and temperature to emf (mV).
// For the invented demo logs only. Written on its own, sharing no code with the solver, so that reading these
// logs back is also a check of it. Valid for single-phase austenite, 750-1050 °C, 0.05-1.4 wt% C; no errors,
// outside it the figures are meaningless.
//
// Carbon activity: P. Gustafson, Scand. J. Metall. 14 (1985) 259, fcc Fe-C, as quoted in public listings.
// CO = C + 1/2 O2: log K = -5910.5/T - 4.5558, fitted to the NASA polynomials (TM-4513) at 1073-1323 K.
// Emf: Nernst equation against air with 20.95 % oxygen.

const GAS_CONSTANT = 8.314463; // J/(mol K)
const MOLAR_C = 12.011;
const MOLAR_FE = 55.845;
const LOG_O2_AIR = Math.log10(0.2095);
const MV_PER_DECADE_K = 0.099211; // 2.302585 R/(2F), for one oxygen atom, in mV/K

export function carbonActivity(carbon_wt_pct, kelvin) {
  const carbon = carbon_wt_pct / MOLAR_C;
  const y = carbon / ((100 - carbon_wt_pct) / MOLAR_FE); // site fraction: atoms C for each atom Fe
  const energy = 77207 - 15.877 * kelvin - 34671 * (1 - 2 * y);
  return Math.exp(energy / (GAS_CONSTANT * kelvin)) * (y / (1 - y));
}

export function probeEmf_mV(carbon_wt_pct, co_fraction, temperature_degc) {
  const kelvin = temperature_degc + 273.15;
  const logK = -5910.5 / kelvin - 4.5558;
  const logActivity = Math.log10(carbonActivity(carbon_wt_pct, kelvin));
  return MV_PER_DECADE_K * kelvin * (logActivity - logK - Math.log10(co_fraction) + 0.5 * LOG_O2_AIR);
}
