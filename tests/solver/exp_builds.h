// The kernel's exponential as each build of the kernel computes it, for fast_exp_test.cpp.
#pragma once

#include <cstddef>

namespace hearthfront::testing {

// exp of eight values, in packs of `width` = 1, 2, 4 or 8.
void exp_baseline(std::size_t width, const double* x, double* result);
void exp_avx2_fma(std::size_t width, const double* x, double* result);  // only where the processor has both

}  // namespace hearthfront::testing
