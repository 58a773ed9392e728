// Private to exp_baseline.cpp and exp_avx2.cpp, which compile it with the options of each build.
#pragma once

#include "exp_builds.h"
#include "solver/diffusion/fast_exp.h"

namespace hearthfront::testing {
namespace {

template <std::size_t W>
void exp_in_packs(const double* x, double* result) {
  for (std::size_t i = 0; i < 8; i += W) solver::fast_exp(solver::Pack<W>::load(x + i)).store(result + i);
}

inline void exp_of_width(std::size_t width, const double* x, double* result) {
  switch (width) {
    case 1:
      return exp_in_packs<1>(x, result);
    case 2:
      return exp_in_packs<2>(x, result);
    case 4:
      return exp_in_packs<4>(x, result);
    default:
      return exp_in_packs<8>(x, result);
  }
}

}  // namespace
}  // namespace hearthfront::testing
