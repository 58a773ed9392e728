// What drives one lane through a step. Plain data without functions, because both builds of the step kernel
// (kernel.h) read it.
#pragma once

#include "solver/material/diffusivity.h"

namespace hearthfront::solver {

struct SurfaceCondition {
  double equilibrium_wt_pct = 0;
  double resistance_s_per_m = 0;
  double forced_wt_pct_m_per_s = 0;
};

struct LaneConditions {
  DiffusivityForm diffusivity;
  SurfaceCondition surface;
};

// A film of this share of the first spacing stands in for resistance 0: it lowers the carbon of a fixed
// surface by that share of the drop to the next node.
inline constexpr double least_film = 1e-5;

}  // namespace hearthfront::solver
