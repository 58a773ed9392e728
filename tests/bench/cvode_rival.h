// The cycle that bench_cycle measures on, and SUNDIALS CVODE at its best on it.
//
// "At its best": BDF with analytic banded Jacobian and stop times at each change of input, on the mesh and
// tolerances, out of a scan, that are fastest while the depths stay within 0.2 um of a converged reference on
// each of five noise realisations. It is held to the depths at 0.35, 0.40 and core + 0.04 wt% C, as this
// solver is; and, for comparison, to the first two only, which lets it off the fine cells under the case.
#pragma once

#include <array>
#include <cstddef>
#include <vector>

#include "support/same_cycle.h"

namespace hearthfront::testing {

inline constexpr double bench_allowance_m = 0.2e-6;
inline constexpr std::size_t bench_realisations = 5;
using Depths = std::array<double, 3>;

// Plate of 20 mm, 20MnCr5.
solver::CarburizingPart bench_part();

// The carbon, in wt%, at which the depths are read.
std::array<double, 3> bench_limits(const solver::CarburizingPart& part);

// Of the first `held` depths.
double largest_difference(const Depths& a, const Depths& b, std::size_t held = 3);

struct Realisation {
  std::vector<solver::IntervalInputs> inputs;
  ReferenceProblem problem;
  Depths exact;
};
std::vector<Realisation> bench_cycles(const solver::CarburizingPart& part);

struct CellPlan {
  double first_m, growth, cells_per_length, fine_lengths, core_growth;
};

struct Rival {
  CellPlan plan;
  ReferenceOptions options;
  double seconds = 0, error_m = 0;
  std::size_t cells = 0;
  long steps = 0;
};

// Scans, prints the five best and returns the best; about half a minute.
Rival best_rival(const solver::CarburizingPart& part, std::vector<Realisation>& all, std::size_t held);

}  // namespace hearthfront::testing
