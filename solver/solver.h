// Start here: the front door of the solver. A part's model is made once (GasCarburizing), its State is
// advanced over lattice intervals, and depths are read off the State (section/measures.h).
//
// No clock, I/O, threads or logging behind any of these headers; models are immutable and may be shared,
// a State and a Workspace belong to one thread at a time. Absolute SI inside; units are in the names.
#pragma once

#include "solver/atmosphere/carbon_gas.h"
#include "solver/diffusion/field.h"
#include "solver/diffusion/kernel_choice.h"
#include "solver/diffusion/mesh.h"
#include "solver/material/activity.h"
#include "solver/material/alloy.h"
#include "solver/material/case_hardness.h"
#include "solver/material/diffusivity.h"
#include "solver/material/hardenability.h"
#include "solver/material/hardness.h"
#include "solver/material/martensite.h"
#include "solver/material/sources.h"
#include "solver/material/steel.h"
#include "solver/material/tempering.h"
#include "solver/process/gas_carburizing.h"
#include "solver/section/hardness_profile.h"
#include "solver/section/measures.h"

namespace hearthfront::solver {

// Part of every stored result. Raised whenever a change can alter a bit of a result.
inline constexpr const char* model_version = "gas-carburizing 3";

}  // namespace hearthfront::solver
