// The seam between the stepper and the builds of the step kernel (kernel_step.h, compiled by
// kernel_baseline.cpp and kernel_avx2.cpp). Private to solver/diffusion.
//
// Plain data only: code compiled for AVX2 must never stand in for baseline code, and the linker keeps one
// copy of any inline function or template instance that both define. So the kernel's own code lives in a
// namespace per build, and what it includes here has no functions (checked by tests: solver_kernel_symbols).
#pragma once

#include <cstddef>

#include "solver/diffusion/lane_conditions.h"

namespace hearthfront::solver {

// One step of one block of lanes. Node-major: value of lane l at node i stands at [i * width + l].
struct BlockStep {
  std::size_t nodes;  // even, at least 4
  // The rows of the mesh (mesh.h).
  const double *conductance_per_m, *mass_lower_m, *mass_diagonal_m, *mass_upper_m;
  double first_spacing_m;
  const LaneConditions* conditions;
  std::size_t lanes;  // entries in `conditions`, 1 to width; spare lanes repeat the last
  double dt_s;
  bool damped;
  double* carbon_wt_pct;     // nodes * width
  double* crossed_wt_pct_m;  // width
  double* scratch;           // kernel_scratch_arrays * nodes * width, aligned to kernel_alignment bytes
};
inline constexpr std::size_t kernel_scratch_arrays = 7;
inline constexpr std::size_t kernel_alignment = 64;

// Neither allocates nor throws; NaN in gives NaN out.
struct Kernel {
  void (*step_one)(const BlockStep&);    // width 1
  void (*step_eight)(const BlockStep&);  // width 8
};

extern const Kernel baseline_kernel;
#if defined(HF_HAS_AVX2_KERNEL)
extern const Kernel avx2_fma_kernel;
#endif

const Kernel& chosen_kernel();

}  // namespace hearthfront::solver
