// One 8 h carburizing cycle with noisy minute data, for each build of the step kernel: this solver against
// SUNDIALS CVODE at its best (cvode_rival.h), the cost of a member in an ensemble, and the cost of a node and
// step against the machine's floor (kernel_floor.h). All figures of one run, the least of many repeats, in
// processor time. Run it on an idle machine; it takes about two minutes.
#include <algorithm>
#include <cstdio>
#include <fstream>
#include <string>
#include <thread>
#include <vector>

#include "bench/cvode_rival.h"
#include "bench/kernel_floor.h"
#include "solver/diffusion/kernel_choice.h"
#include "support/cpu_time.h"

using namespace hearthfront::solver;
using namespace hearthfront::testing;

namespace {

constexpr std::size_t ensemble_size = 64;

struct Own {
  double seconds = 1e9, error_m = 0;
  std::size_t nodes = 0;
  WorkCounters work;
};

// Keeps the least time of this and earlier calls.
void measure(Own& own, const CarburizingPart& part, const std::vector<Realisation>& all, std::size_t members,
             int repeats) {
  std::vector<Member> lanes(members);
  for (std::size_t i = 1; i < members; ++i) {
    const double x = static_cast<double>(i) / static_cast<double>(members);
    lanes[i] = {0.9 + 0.2 * x, 1.3 - 0.6 * x, 1, 4 * x - 2, 0.02 * x - 0.01, 0.01 * x};
  }
  for (const Realisation& r : all) {
    MeshDensity density;
    density.diffusion_length_m = diffusion_length_m(r.inputs);
    const GasCarburizing model(part, density, lanes);
    for (int repeat = 0; repeat < repeats; ++repeat) {
      GasCarburizing::Workspace workspace(model);
      GasCarburizing::State state = model.start(850);
      const double begin = thread_seconds();
      for (const IntervalInputs& in : r.inputs) model.advance(state, in, workspace);
      own.seconds = std::min(own.seconds, thread_seconds() - begin);
      const Profile profile = read_profile(state.field, 0, state.conditions[0]);
      Depths depths;
      for (std::size_t i = 0; i < depths.size(); ++i)
        depths[i] = depth_at_carbon_m(profile, bench_limits(part)[i]).value_or(0);
      own.error_m = std::max(own.error_m, largest_difference(depths, r.exact));
      own.work = workspace.work();
    }
    own.nodes = model.mesh().nodes();
  }
}

struct OfKernel {
  KernelKind kind;
  Own one, ensemble;
  double floor = 1e9;  // seconds for a node and step
};

// Before and after the long scan of CVODE's settings, so that both have seen the machine at its best.
void measure(std::vector<OfKernel>& kernels, const CarburizingPart& part,
             const std::vector<Realisation>& all) {
  for (OfKernel& k : kernels) {
    use_kernel(k.kind);
    measure(k.one, part, all, 1, 20);
    measure(k.ensemble, part, all, ensemble_size, 5);
    k.floor = std::min(k.floor, floor_seconds_per_node_step(k.ensemble.nodes, k.kind));
  }
}

void print(const OfKernel& k, const Rival& rival, const Rival& two_depths) {
  const double per_member = k.ensemble.seconds / ensemble_size;
  std::printf("\nkernel %s\n", kernel_name(k.kind));
  std::printf(
      "1. one part: %.3f ms, %.3f um (%zu nodes, %llu steps) against CVODE %.2f ms, %.3f um: %.0f times "
      "faster\n",
      1e3 * k.one.seconds, 1e6 * k.one.error_m, k.one.nodes,
      static_cast<unsigned long long>(k.one.work.steps), 1e3 * rival.seconds, 1e6 * rival.error_m,
      rival.seconds / k.one.seconds);
  std::printf("   held to two depths only, CVODE takes %.2f ms: %.0f times\n", 1e3 * two_depths.seconds,
              two_depths.seconds / k.one.seconds);
  std::printf(
      "2. ensemble of %zu: %.4f ms a member, %.3f um: %.1f times faster than a part alone (%.3f ms), %.0f "
      "times faster than one CVODE run (%.2f ms)\n",
      ensemble_size, 1e3 * per_member, 1e6 * k.ensemble.error_m, k.one.seconds / per_member,
      1e3 * k.one.seconds, rival.seconds / per_member, 1e3 * rival.seconds);
  std::printf("   held to two depths only: %.0f times\n", two_depths.seconds / per_member);
  const double own_cost =
      k.ensemble.seconds / static_cast<double>(k.ensemble.work.steps * k.ensemble.nodes * ensemble_size);
  std::printf(
      "3. node and step: %.2f ns against a floor (2 vector exp + tridiagonal, 8 lanes, same vectors) of "
      "%.2f ns: %.2f times\n",
      1e9 * own_cost, 1e9 * k.floor, own_cost / k.floor);
}

std::string processor() {
  std::ifstream info("/proc/cpuinfo");
  for (std::string line; std::getline(info, line);)
    if (line.rfind("model name", 0) == 0) return line.substr(line.find(':') + 2);
  return "unknown processor";
}

}  // namespace

int main() {
  std::setvbuf(stdout, nullptr, _IOLBF, BUFSIZ);
  std::printf("machine: %s, %u cores; compiler: g++ %s; kernel chosen: %s\n", processor().c_str(),
              std::thread::hardware_concurrency(), __VERSION__, kernel_name());
  const CarburizingPart part = bench_part();
  std::vector<Realisation> all = bench_cycles(part);
  std::printf(
      "8 h, 480 noisy minutes, plate 20 mm, 20MnCr5; errors: worst of 3 depths and %zu realisations\n",
      bench_realisations);

  std::vector<OfKernel> kernels;
  for (KernelKind kind : {KernelKind::avx2_fma, KernelKind::baseline})
    if (kernel_available(kind)) kernels.push_back({kind, {}, {}});
  measure(kernels, part, all);
  const Rival rival = best_rival(part, all, 3);
  const Rival two_depths = best_rival(part, all, 2);
  measure(kernels, part, all);

  bool accurate = true;
  for (const OfKernel& k : kernels) {
    print(k, rival, two_depths);
    accurate = accurate && k.one.error_m < bench_allowance_m && k.ensemble.error_m < bench_allowance_m;
  }
  return accurate ? 0 : 1;
}
