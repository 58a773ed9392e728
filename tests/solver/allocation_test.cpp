// advance() allocates nothing: counted by this program's own operator new. Replacing it here replaces it for
// the whole test program, which is harmless: it only counts.
#include <doctest/doctest.h>

#include <atomic>
#include <cstdlib>
#include <new>

#include "solver/diffusion/kernel_choice.h"
#include "support/cycles.h"
#include "support/paths.h"

namespace {
std::atomic<unsigned long> allocations{0};
}

void* operator new(std::size_t size) {
  ++allocations;
  if (void* p = std::malloc(size > 0 ? size : 1)) return p;
  throw std::bad_alloc();
}
void operator delete(void* p) noexcept {
  std::free(p);
}
void operator delete(void* p, std::size_t) noexcept {
  std::free(p);
}

using namespace hearthfront::solver;
using namespace hearthfront::testing;

TEST_CASE("advancing a state allocates nothing, alone and in lanes, with either kernel") {
  const auto inputs = noisy_eight_hours(3);
  const KernelKind usual = kernel_choice();
  for (KernelKind kind : {KernelKind::baseline, KernelKind::avx2_fma})
    for (std::size_t lanes : {1u, 12u}) {
      if (!use_kernel(kind)) continue;
      const GasCarburizing model(CarburizingPart{}, MeshDensity{}, std::vector<Member>(lanes));
      GasCarburizing::Workspace workspace(model);
      GasCarburizing::State state = model.start(850);
      const unsigned long before = allocations;
      for (const IntervalInputs& in : inputs) model.advance(state, in, workspace);
      const unsigned long during = allocations - before;
      CHECK(during == 0);
    }
  use_kernel(usual);
  const ProcessPath path = process_paths(4)[5];  // film, measured gas, out of gas, below austenite
  CarburizingPart part;
  part.film_s = path.film_s;
  const GasCarburizing model(part, MeshDensity{});
  GasCarburizing::Workspace workspace(model);
  GasCarburizing::State state = model.start(850);
  const unsigned long before = allocations;
  for (const IntervalInputs& in : path.inputs) model.advance(state, in, workspace);
  const unsigned long during = allocations - before;
  CHECK(during == 0);
  CHECK(allocations > 0);  // the counter is in use
}
