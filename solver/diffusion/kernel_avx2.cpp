// The step kernel for processors with AVX2 and FMA. This file alone is compiled with -mavx2 -mfma; nothing in
// it may run before kernel_choice.cpp has asked the processor, so it holds one table of constants.
#define HF_KERNEL_AVX2
#include "solver/diffusion/kernel.h"
#include "solver/diffusion/kernel_step.h"

namespace hearthfront::solver {

const Kernel avx2_fma_kernel{kernel::step<1>, kernel::step<8>};

}  // namespace hearthfront::solver
