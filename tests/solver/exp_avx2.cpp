// Compiled with -mavx2 -mfma where there is an AVX2 kernel; elsewhere never called.
#if defined(__AVX2__)
#define HF_KERNEL_AVX2
#endif
#define HF_KERNEL_BUILD test_avx2
#include "exp_loops.h"

namespace hearthfront::testing {

void exp_avx2_fma(std::size_t width, const double* x, double* result) {
  exp_of_width(width, x, result);
}

}  // namespace hearthfront::testing
