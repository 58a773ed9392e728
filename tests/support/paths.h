// Ways a part may take through a shop, for checks that must hold on all of them. Invented data: the noisy
// eight hours of cycles.h with something happening in it.
#pragma once

#include <string>
#include <vector>

#include "solver/solver.h"

namespace hearthfront::testing {

struct ProcessPath {
  std::string name;
  double film_s = 0;
  std::vector<solver::IntervalInputs> inputs;
  std::vector<solver::IntervalInputs>
      rework;  // a second load that begins from the first's profile; may be empty
};

// Boost and diffuse; with a film; out of gas twice; twice below austenite; measured gas; all of these at
// once; rework.
std::vector<ProcessPath> process_paths(std::uint32_t seed);

}  // namespace hearthfront::testing
