#define HF_KERNEL_BUILD floor_baseline  // other options than the solver's own packs
#include "bench/kernel_floor_loops.h"

namespace hearthfront::testing {

void floor_step_baseline(const FloorArrays& arrays, bool library_exp) {
  floor_step(arrays, library_exp);
}

}  // namespace hearthfront::testing
