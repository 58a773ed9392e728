#include "bench/kernel_floor.h"

#include <algorithm>
#include <vector>

#include "bench/kernel_floor_arrays.h"
#include "support/cpu_time.h"

namespace hearthfront::testing {

double floor_seconds_per_node_step(std::size_t nodes, solver::KernelKind kind) {
  const auto step = kind == solver::KernelKind::baseline ? floor_step_baseline : floor_step_avx2;
  const std::size_t doubles = nodes * floor_lanes;
  std::vector<double> lower(doubles, -1.0), upper(doubles, -1.0), argument(doubles), diagonal(doubles),
      multiplier(doubles), outward(doubles), right(doubles);
  const FloorArrays a{nodes,           lower.data(),      upper.data(),   argument.data(),
                      diagonal.data(), multiplier.data(), outward.data(), right.data()};
  for (std::size_t i = 0; i < doubles; ++i) argument[i] = -1.0 + 1e-3 * static_cast<double>(i);
  constexpr int steps = 500;
  double best = 1e9;
  double keep = 0;
  for (int repeat = 0; repeat < 60; ++repeat) {
    const bool library_exp = repeat % 2 == 0;
    const double begin = thread_seconds();
    for (int i = 0; i < steps; ++i) {
      step(a, library_exp);
      keep += right[0];
    }
    best = std::min(best, thread_seconds() - begin);
  }
  // The sum keeps the work from being optimised away; it is always positive.
  return keep > 0 ? best / (steps * static_cast<double>(doubles)) : 0.0;
}

}  // namespace hearthfront::testing
