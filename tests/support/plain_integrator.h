// The carburizing equations a third time, plainly, and with nothing of the solver: the truth that an outlook
// is held against where the model must be allowed to be wrong. No header of solver/ is included.
//
// dC/dt = (1/A) d/dx( A D dC/dx ) by finite volumes; flux beta (Cp - k C_s) in series with half the first
// cell; backward Euler solved by Newton's method, made second order by one extrapolation a step (J. D.
// Lawson, J. Ll. Morris, SIAM J. Numer. Anal. 15 (1978) 1212). Steps follow the input's pieces, and are
// shorter after a jump. Depths are within 0.5 um of CVODE (tests/outlook/plain_integrator_test.cpp), in a few
// ms a cycle.
#pragma once

#include <vector>

namespace hearthfront::testing {

enum class PlainShape { plate, cylinder, sphere };
// agren: J. Agren, Scripta Metall. 20 (1986) 1507. tibbetts: G. G. Tibbetts, J. Appl. Phys. 51 (1980) 4813
// (constants from memory): 0.47e-4 exp(-1.6 C) exp(-(37000 - 6600 C)/(1.987 T)) m2/s. constant: for exact
// solutions.
enum class PlainLaw { agren, tibbetts, constant };

struct PlainSteel {
  double mn_wt_pct = 0, cr_wt_pct = 0, ni_wt_pct = 0, mo_wt_pct = 0, si_wt_pct = 0;
};

struct PlainPart {
  PlainShape shape = PlainShape::plate;
  double extent_m = 0.01;  // half thickness or radius
  PlainSteel steel;
  double core_wt_pct = 0.2;          // what is in the part
  double nominal_core_wt_pct = 0.2;  // what Andrews' Ae3 is asked with
  double lag_s = 1200;
  PlainLaw law = PlainLaw::agren;
  double constant_diffusivity_m2_s = 0;
  double diffusivity_scale = 1;  // beside the alloy factor
  double film_s = 0;
  double diffusion_length_m = 1e-3;  // 2 sqrt(D t) of the cycle, about: the mesh follows it
};

// Constant over the piece. `transfer_m_per_s` is beta; 0 outside gas.
struct PlainPiece {
  double duration_s = 60, temperature_degc = 20, carbon_potential_wt_pct = 0, transfer_m_per_s = 0;
  bool of_the_part = false;  // the temperature is the part's own, no lag
  // beta is meant at 940 degC and follows the part's temperature as exp(-34900/(R T)).
  bool transfer_by_temperature = false;
};

// beta at 940 degC: 1.25e-7 m/s at 20 % CO and 40 % H2, as pCO pH2^0.5.
double plain_transfer_m_per_s(double co_fraction, double h2_fraction);

class PlainIntegrator {
 public:
  // `fineness` 2 halves every cell and step.
  PlainIntegrator(const PlainPart& part, double charge_degc, double fineness = 1);
  // Throws std::runtime_error where Newton's method does not settle.
  void advance(const PlainPiece& piece);

  // The deepest crossing by a cubic through the four nearest cells; 0 where nothing is above the limit.
  double depth_at_m(double limit_wt_pct) const;
  double part_temperature_degc() const { return part_degc_; }
  double surface_wt_pct() const { return carbon_.front(); }  // of the outermost cell
  double centre_wt_pct() const { return carbon_.back(); }
  // At any depth, by the same cubic.
  double carbon_at_wt_pct(double depth_m) const;
  double inside_wt_pct_m() const;  // per unit of surface area
  double crossed_wt_pct_m() const { return crossed_; }

 private:
  struct Gas {
    double kelvin, equilibrium_wt_pct, transfer_m_per_s;
  };
  void euler(const std::vector<double>& from, std::vector<double>& to, double& crossed, double step_s,
             const Gas& gas);
  void step(double step_s, const Gas& gas);
  void diffusivity(double carbon_wt_pct, double kelvin, double& d, double& slope) const;

  PlainPart part_;
  double fineness_, alloy_factor_, diffusivity_factor_, austenite_from_degc_;
  std::vector<double> centre_, volume_, conductance_, carbon_;
  double part_degc_, crossed_ = 0, since_jump_s_ = 0, in_gas_s_ = 0;
  double last_potential_ = -1, last_degc_ = -1e3;
  std::vector<double> whole_, half_, halves_, upper_, right_;
};

}  // namespace hearthfront::testing
