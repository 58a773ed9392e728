// What a step cannot do without, at the machine's own best: the exponential of D(C,T) at every node for each
// of two stages, and one tridiagonal system solved twice, for eight lanes side by side, in the vectors of one
// build of the step kernel. The exponential is the C library's or the kernel's own, whichever is faster.
// Nothing else of the model.
#pragma once

#include <cstddef>

#include "solver/diffusion/kernel_choice.h"

namespace hearthfront::testing {

// Seconds of processor time for one node, one lane and one step, best of several runs.
double floor_seconds_per_node_step(std::size_t nodes, solver::KernelKind kind);

}  // namespace hearthfront::testing
