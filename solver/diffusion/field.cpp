#include "solver/diffusion/field.h"

#include <algorithm>
#include <cassert>
#include <cmath>
#include <utility>

#include "solver/diffusion/kernel.h"

namespace hearthfront::solver {
SettlingStep settling_step(double settled_s, double left_s) {
  constexpr double damped_step_s = 0.5, damped_until_s = 2.0, least_step_s = 2.0, growth = 0.4;
  const bool damped = settled_s < damped_until_s;
  const double wanted = damped ? damped_step_s : std::max(least_step_s, growth * settled_s);
  if (left_s <= wanted) return {left_s, damped};
  // No equal parts while damped: the growing steps that follow will divide what is left.
  return {damped ? damped_step_s : left_s / std::ceil(left_s / wanted - 1e-9), damped};
}

CarbonField::CarbonField(std::shared_ptr<const Mesh> m, std::size_t lane_count, double carbon)
    : mesh(std::move(m)), lanes(lane_count), width(lane_count == 1 ? 1 : block) {
  const std::size_t blocks = (lanes + width - 1) / width;
  values.assign(blocks * width * mesh->nodes(), carbon);
  crossed_wt_pct_m.assign(blocks * width, 0.0);
}

double CarbonField::inventory_wt_pct_m(std::size_t lane) const {
  double sum = 0.0;
  for (std::size_t i = mesh->nodes(); i-- > 0;) sum += mesh->volume_m[i] * carbon_wt_pct(lane, i);
  return sum;
}

DiffusionStepper::DiffusionStepper(std::size_t nodes, std::size_t lanes) : kernel_(&chosen_kernel()) {
  const std::size_t width = lanes == 1 ? 1 : CarbonField::block;
  scratch_.assign(kernel_scratch_arrays * nodes * width + kernel_alignment / sizeof(double), 0.0);
}

void DiffusionStepper::step(CarbonField& field, std::span<const LaneConditions> conditions, double dt_s,
                            bool damped) {
  assert(conditions.size() == field.lanes);
  const Mesh& mesh = *field.mesh;
  void* scratch = scratch_.data();
  std::size_t space = scratch_.size() * sizeof(double);
  std::align(kernel_alignment, kernel_scratch_arrays * mesh.nodes() * field.width * sizeof(double), scratch,
             space);
  BlockStep block{mesh.nodes(),
                  mesh.conductance_per_m.data(),
                  mesh.mass_lower_m.data(),
                  mesh.mass_diagonal_m.data(),
                  mesh.mass_upper_m.data(),
                  mesh.depth_m[1],
                  nullptr,
                  0,
                  dt_s,
                  damped,
                  nullptr,
                  nullptr,
                  static_cast<double*>(scratch)};
  for (std::size_t first = 0; first < field.lanes; first += field.width) {
    block.conditions = conditions.data() + first;
    block.lanes = std::min(field.width, field.lanes - first);
    block.carbon_wt_pct = field.values.data() + first * mesh.nodes();
    block.crossed_wt_pct_m = field.crossed_wt_pct_m.data() + first;
    (field.width == 1 ? kernel_->step_one : kernel_->step_eight)(block);
  }
  ++work_.steps;
  work_.node_evaluations += (damped ? 1 : 2) * mesh.nodes() * field.lanes;
}

double surface_transfer_m_per_s(const Mesh& mesh, const LaneConditions& c) {
  const double floor =
      least_film * mesh.depth_m[1] / diffusivity_m2_s(c.diffusivity, c.surface.equilibrium_wt_pct);
  return 1.0 / (c.surface.resistance_s_per_m + floor);
}

SurfaceState surface_state(const CarbonField& field, std::size_t lane, const LaneConditions& conditions) {
  SurfaceState state;
  state.carbon_wt_pct = field.carbon_wt_pct(lane, 0);
  state.flux_wt_pct_m_per_s = conditions.surface.forced_wt_pct_m_per_s +
                              (conditions.surface.equilibrium_wt_pct - state.carbon_wt_pct) *
                                  surface_transfer_m_per_s(*field.mesh, conditions);
  return state;
}

}  // namespace hearthfront::solver
