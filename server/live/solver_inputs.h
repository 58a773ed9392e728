// From an interval of the lattice to what the solver takes, and from an item to its model.
#pragma once

#include "server/live/lattice.h"
#include "server/live/load_definition.h"
#include "solver/solver.h"

namespace hearthfront::server {

solver::IntervalInputs solver_inputs(const IntervalInput& input, double duration_s);

struct PartModel {
  solver::CarburizingPart part;
  solver::MeshDensity density;
};
PartModel part_model(const LoadDefinition& load, const Item& item);
solver::GasCarburizing::State start_state(const LoadDefinition& load, const Item& item,
                                          const solver::GasCarburizing& model);

}  // namespace hearthfront::server
