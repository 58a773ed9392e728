// The carburizing equations solved a second time, by SUNDIALS CVODE (A. C. Hindmarsh et al., ACM TOMS 31
// (2005) 363) on a discretisation of its own: nothing of solver/diffusion or solver/process is called.
//
// dC/dt = (1/A) d/dx( A D dC/dx ); finite volumes with the diffusivity averaged from the two cell centres;
// inputs constant over each piece. Used as the independent integrator of tests/validation and as the rival
// of tests/bench. Failure: std::runtime_error with CVODE's own code.
#pragma once

#include <cstddef>
#include <vector>

namespace hearthfront::testing {

enum class ReferenceShape { plate, cylinder, bore };

// One piece of the cycle, everything constant in it.
struct ReferencePiece {
  double duration_s;
  double temperature_k;
  double equilibrium_wt_pct;  // Cp / k, capped where the model caps it
  double transfer_m_per_s;    // beta k
};

struct ReferenceProblem {
  ReferenceShape shape = ReferenceShape::plate;
  double bore_radius_m = 0;
  std::vector<double> face_m;  // from 0 to the extent
  double core_wt_pct = 0.2;
  double diffusivity_factor = 1;  // times Agren 1986
  std::vector<ReferencePiece> pieces;
};

struct ReferenceOptions {
  double relative_tolerance = 1e-9;
  double absolute_tolerance_wt_pct = 1e-10;
  int highest_order = 5;
  // Restart the integrator at each change of input, or let its error control find the kink.
  bool restart_at_pieces = false;
};

struct ReferenceResult {
  std::vector<double> depth_m;  // cell centres
  std::vector<double> carbon_wt_pct;
  std::vector<double> rate_wt_pct_s;  // dC/dt at the end, by the right-hand side itself
  long steps = 0;
  double seconds = 0;  // processor time of the integration, set-up excluded

  // The deepest crossing by a cubic through the four nearest centres.
  double depth_at_m(double limit_wt_pct) const;
};

ReferenceResult solve_reference(const ReferenceProblem& problem, const ReferenceOptions& options = {});

// Faces growing geometrically from `first_m` up to `bulk_m`, then by `core_growth` beyond `fine_to_m`.
std::vector<double> reference_faces(double extent_m, double first_m, double growth, double bulk_m,
                                    double fine_to_m, double core_growth);

}  // namespace hearthfront::testing
