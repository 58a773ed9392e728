// What the builds of the floor's loops share. Private to kernel_floor*.
#pragma once

#include <cstddef>

namespace hearthfront::testing {

inline constexpr std::size_t floor_lanes = 8;

// Each nodes * floor_lanes doubles.
struct FloorArrays {
  std::size_t nodes;
  const double *lower, *upper, *argument;
  double *diagonal, *multiplier, *outward, *right;
};

// The exponential is the C library's or the kernel's own.
void floor_step_baseline(const FloorArrays& arrays, bool library_exp);
void floor_step_avx2(const FloorArrays& arrays, bool library_exp);

}  // namespace hearthfront::testing
