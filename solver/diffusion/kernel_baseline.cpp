// The step kernel for every processor of the architecture; on x86-64 in vectors of 16 bytes (SSE2).
#include "solver/diffusion/kernel.h"
#include "solver/diffusion/kernel_step.h"

namespace hearthfront::solver {

const Kernel baseline_kernel{kernel::step<1>, kernel::step<8>};

}  // namespace hearthfront::solver
