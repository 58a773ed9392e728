// A part and its logged inputs as a problem for the reference integrator: the same equations, with the alloy
// factor, the diffusivity factor and the carbide cap evaluated here from their published formulas again.
#pragma once

#include <vector>

#include "solver/solver.h"
#include "support/cvode_reference.h"
#include "support/cycles.h"

namespace hearthfront::testing {

// The part's beta_m_per_s must be set and every input must carry a load temperature. Time below austenite is
// left out, time outside gas has no transfer, a film follows time continuously. `face_m` is left to the
// caller.
ReferenceProblem reference_problem(const solver::CarburizingPart& part,
                                   const std::vector<solver::IntervalInputs>& inputs);

// 2 sqrt(int D dt) of the inputs, by the solver's own estimate.
double diffusion_length_m(const std::vector<solver::IntervalInputs>& inputs);

}  // namespace hearthfront::testing
