// One section of every shape, for tests that must hold on all of them.
#pragma once

#include <array>

#include "solver/diffusion/mesh.h"

namespace hearthfront::testing {

inline std::array<solver::Section, 4> all_shapes(double extent_m, double bore_radius_m) {
  using solver::Shape;
  return {{{Shape::plate, extent_m, 0},
           {Shape::cylinder, extent_m, 0},
           {Shape::sphere, extent_m, 0},
           {Shape::bore, extent_m, bore_radius_m}}};
}

}  // namespace hearthfront::testing
