// Compiled with -mavx2 -mfma where the processor is an x86-64; elsewhere never called.
#if defined(__AVX2__)
#define HF_KERNEL_AVX2
#endif
#define HF_KERNEL_BUILD floor_avx2  // other options than the solver's own packs
#include "bench/kernel_floor_loops.h"

namespace hearthfront::testing {

void floor_step_avx2(const FloorArrays& arrays, bool library_exp) {
  floor_step(arrays, library_exp);
}

}  // namespace hearthfront::testing
