// The carbon in one section for one or many ensemble members ("lanes"), and the step that advances it.
//
// Equation: dC/dt = (1/A) d/dx( A D(C,T) dC/dx ), zero flux at the centre; at the surface
//   flux = forced + (equilibrium - C_s) / resistance,
// where for a gas resistance = 1/(beta k) and equilibrium = Cp/k, for a fixed surface resistance = 0,
// and for a prescribed flux resistance = infinity.
// Method: the compact, conservative fourth-order rows of mesh.h with Kirchhoff's potential (potential.h); in
// time the two-stage linearly implicit method of order 2, L-stable with gamma = 1 - 1/sqrt(2) (J. G. Verwer
// et al., SIAM J. Sci. Comput. 20 (1999) 1456, "ROS2"), analytic Jacobian, one factorisation a step.
//
// Every lane's arithmetic is the same whether it runs alone or beside others, so a member's result does
// not depend on how members are grouped; it does depend, within 1e-9, on the kernel chosen for the processor
// (kernel_choice.h). No allocation, I/O, clock or exception after construction.
#pragma once

#include <cstddef>
#include <cstdint>
#include <memory>
#include <span>
#include <vector>

#include "solver/diffusion/lane_conditions.h"
#include "solver/diffusion/mesh.h"

namespace hearthfront::solver {

// State. Copying it is how a mark is set.
struct CarbonField {
  CarbonField(std::shared_ptr<const Mesh> mesh, std::size_t lanes, double carbon_wt_pct);

  double carbon_wt_pct(std::size_t lane, std::size_t node) const { return values[index(lane, node)]; }
  void set_carbon_wt_pct(std::size_t lane, std::size_t node, double value) {
    values[index(lane, node)] = value;
  }
  // Carbon inside, per unit of surface area, in wt% m.
  double inventory_wt_pct_m(std::size_t lane) const;

  static constexpr std::size_t block = 8;  // lanes side by side in memory when there is more than one
  std::size_t index(std::size_t lane, std::size_t node) const {
    return width == 1 ? node : ((lane / block) * mesh->nodes() + node) * block + lane % block;
  }

  std::shared_ptr<const Mesh> mesh;
  std::size_t lanes, width;              // width: 1 or `block`
  std::vector<double> values;            // wt%
  std::vector<double> crossed_wt_pct_m;  // carbon that crossed the surface since the start, positive inward
};

// The step to take when `left_s` of an interval remains and the inputs last jumped `settled_s` ago. The first
// 2 s go in short damped steps (bounds hold through a jump of any size); then steps grow with the time since:
// the profile near the surface has the time scale of its own age. What is left is divided into equal parts.
struct SettlingStep {
  double duration_s;
  bool damped;
};
SettlingStep settling_step(double settled_s, double left_s);

struct Kernel;  // kernel.h

struct WorkCounters {
  std::uint64_t steps = 0;             // time steps, of two stages or one where damped
  std::uint64_t node_evaluations = 0;  // potentials computed, over all lanes
};

class DiffusionStepper {
 public:
  // Uses the kernel that is chosen now (kernel_choice.h) for all its life.
  DiffusionStepper(std::size_t nodes, std::size_t lanes);
  // One step of dt_s > 0. `conditions` has one entry for each lane; all lanes share the law's rise and fold.
  // A damped step is of first order in time and never reaches beyond the solution.
  void step(CarbonField& field, std::span<const LaneConditions> conditions, double dt_s, bool damped = false);
  const WorkCounters& work() const { return work_; }

 private:
  const Kernel* kernel_;
  std::vector<double> scratch_;
  WorkCounters work_;
};

// 1/resistance, kept finite where the resistance is 0.
double surface_transfer_m_per_s(const Mesh& mesh, const LaneConditions& conditions);

// Surface carbon and the flux that crosses there now, for one lane.
struct SurfaceState {
  double carbon_wt_pct = 0;
  double flux_wt_pct_m_per_s = 0;
};
SurfaceState surface_state(const CarbonField& field, std::size_t lane, const LaneConditions& conditions);

}  // namespace hearthfront::solver
