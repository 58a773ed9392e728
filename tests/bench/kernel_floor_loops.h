// The loops of the floor (kernel_floor.h), compiled once for each build of the step kernel with the options
// of that build and -ffast-math, so that std::exp becomes the vector exponential of the C library; the
// kernel's own stands beside it. The system is eliminated from both ends at once, as the kernel does it: one
// chain of divisions is slower.
#pragma once

#include <cmath>
#include <cstddef>

#include "bench/kernel_floor_arrays.h"
#include "solver/diffusion/fast_exp.h"
#include "solver/diffusion/pack.h"

namespace hearthfront::testing {
namespace {

using P = solver::Pack<floor_lanes>;

inline void exponentials_of_library(std::size_t values, const double* __restrict from, double* __restrict to,
                                    double offset) {
  for (std::size_t i = 0; i < values; ++i) to[i] = offset + std::exp(from[i]);
}

inline void exponentials_of_kernel(std::size_t values, const double* __restrict from, double* __restrict to,
                                   double offset) {
  for (std::size_t i = 0; i < values; i += floor_lanes)
    (P::all(offset) + solver::fast_exp(P::load(from + i))).store(to + i);
}

// Leaves reciprocal pivots in the diagonal.
inline void factor(const FloorArrays& a) {
  const std::size_t n = a.nodes, middle = n / 2;
  P left = P::all(0.0), right = P::all(0.0);  // off-diagonal towards the middle over pivot, of the last row
  const auto row = [&](std::size_t i, const double* behind, const double* ahead, P& last) {
    const std::size_t at = i * floor_lanes;
    const P off = P::load(behind + at);
    const P inverse = 1.0 / (P::load(a.diagonal + at) - off * last);
    inverse.store(a.diagonal + at);
    (off * inverse).store(a.multiplier + at);
    last = P::load(ahead + at) * inverse;
    last.store(a.outward + at);
  };
  for (std::size_t i = 0; i < middle; ++i) {
    row(i, a.lower, a.upper, left);
    if (n - 1 - i > middle) row(n - 1 - i, a.upper, a.lower, right);
  }
  const std::size_t m = middle * floor_lanes;
  const P low = P::load(a.lower + m), up = P::load(a.upper + m);
  const P inverse = 1.0 / (P::load(a.diagonal + m) - low * left - up * right);
  inverse.store(a.diagonal + m);
  (low * inverse).store(a.multiplier + m);
  (up * inverse).store(a.outward + m);
}

inline void solve(const FloorArrays& a) {
  const std::size_t n = a.nodes, middle = n / 2;
  P left = P::all(0.0), right = P::all(0.0);
  const auto inward = [&](std::size_t i, P& last) {
    const std::size_t at = i * floor_lanes;
    last = P::load(a.right + at) * P::load(a.diagonal + at) - P::load(a.multiplier + at) * last;
    last.store(a.right + at);
  };
  for (std::size_t i = 0; i < middle; ++i) {
    inward(i, left);
    if (n - 1 - i > middle) inward(n - 1 - i, right);
  }
  inward(middle, left);
  const std::size_t m = middle * floor_lanes;
  left -= P::load(a.outward + m) * right;
  left.store(a.right + m);
  right = left;
  const auto outward = [&](std::size_t i, P& last) {
    const std::size_t at = i * floor_lanes;
    last = P::load(a.right + at) - P::load(a.outward + at) * last;
    last.store(a.right + at);
  };
  for (std::size_t i = 1; i <= middle; ++i) {
    outward(middle - i, left);
    if (middle + i < n) outward(middle + i, right);
  }
}

inline void floor_step(const FloorArrays& a, bool library_exp) {
  const std::size_t values = a.nodes * floor_lanes;
  const auto exponentials = library_exp ? exponentials_of_library : exponentials_of_kernel;
  exponentials(values, a.argument, a.diagonal, 3.0);
  exponentials(values, a.argument, a.right, 0.0);
  factor(a);
  solve(a);
  solve(a);
}

}  // namespace
}  // namespace hearthfront::testing
