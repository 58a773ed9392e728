#include "solver/diffusion/field.h"

#include <array>
#include <cassert>
#include <cmath>

#include "solver/diffusion/fast_exp.h"

namespace hearthfront::solver {
namespace {

constexpr double gamma = 0.29289321881345247560;  // 1 - 1/sqrt(2)

// What the kernel needs of the lanes of one block, unpacked for vector loads.
template <std::size_t W>
struct Lanes {
  double rise, fold;
  std::array<double, W> hump, scale, exponent, slope;
  std::array<double, W> equilibrium, resistance, forced;

  explicit Lanes(std::span<const LaneConditions> c)
      : rise(c[0].diffusivity.rise), fold(c[0].diffusivity.fold) {
    for (std::size_t l = 0; l < W; ++l) {
      const LaneConditions& lane = c[l < c.size() ? l : c.size() - 1];  // spare lanes repeat the last
      hump[l] = lane.diffusivity.hump;
      scale[l] = lane.diffusivity.scale;
      exponent[l] = lane.diffusivity.exponent;
      slope[l] = lane.diffusivity.slope;
      equilibrium[l] = lane.surface.equilibrium_wt_pct;
      resistance[l] = lane.surface.resistance_s_per_m;
      forced[l] = lane.surface.forced_wt_pct_m_per_s;
    }
  }
};

struct Scratch {
  double *left, *right, *flux, *pivot, *k1, *k2, *trial;
};

// Fluxes through all faces; with Derivatives also d(flux)/dC of the cell on either side. Face 0 is the
// surface: its "left" slot is unused, its "right" slot holds d(surface flux)/dC_0.
template <std::size_t W, bool Derivatives>
void evaluate(const Mesh& mesh, const Lanes<W>& lanes, const double* __restrict u, const Scratch& s) {
  const std::size_t n = mesh.cells();
  const double* __restrict conductance = mesh.conductance_per_m.data();
  double* __restrict flux = s.flux;
  double* __restrict left = s.left;
  double* __restrict right = s.right;
  for (std::size_t i = 1; i < n; ++i) {
    const double g = conductance[i];
    for (std::size_t l = 0; l < W; ++l) {
      const double inner = u[i * W + l];
      const double outer = u[(i - 1) * W + l];
      const double mean = 0.5 * (inner + outer);
      const double inverse = 1.0 / (1.0 - lanes.fold * mean);
      const double z = lanes.rise * mean * inverse;
      const double hump = 1.0 + lanes.hump[l] * z * (1.0 - z);
      const double e = lanes.scale[l] * g * fast_exp(lanes.exponent[l] + lanes.slope[l] * z);
      const double d = e * hump;
      const double drop = outer - inner;
      flux[i * W + l] = d * drop;
      if constexpr (Derivatives) {
        const double dz = lanes.rise * inverse * inverse;
        const double half = 0.5 * drop * dz * (lanes.slope[l] * d + e * lanes.hump[l] * (1.0 - 2.0 * z));
        left[i * W + l] = d + half;
        right[i * W + l] = half - d;
      }
    }
  }
  const double half_cell = 0.5 * mesh.face_m[1];
  for (std::size_t l = 0; l < W; ++l) {
    const double c = u[l];
    const double inverse = 1.0 / (1.0 - lanes.fold * c);
    const double z = lanes.rise * c * inverse;
    const double hump = 1.0 + lanes.hump[l] * z * (1.0 - z);
    const double e = lanes.scale[l] * fast_exp(lanes.exponent[l] + lanes.slope[l] * z);
    const double metal = half_cell / (e * hump);
    const double transfer = 1.0 / (lanes.resistance[l] + metal);
    const double drive = lanes.equilibrium[l] - c;
    flux[l] = lanes.forced[l] + drive * transfer;
    if constexpr (Derivatives) {
      const double dz = lanes.rise * inverse * inverse;
      const double relative = dz * (lanes.slope[l] + lanes.hump[l] * (1.0 - 2.0 * z) / hump);  // dlnD/dC
      right[l] = transfer * (drive * transfer * metal * relative - 1.0);
    }
  }
  for (std::size_t l = 0; l < W; ++l) flux[n * W + l] = 0.0;
}

// Thomas factorisation of V - gamma dt J; pivot holds the reciprocal pivots, left/right are left scaled
// by gamma dt for the two solves.
template <std::size_t W>
void factor(const Mesh& mesh, double gamma_dt, const Scratch& s) {
  const std::size_t n = mesh.cells();
  for (std::size_t i = 0; i < n * W; ++i) {
    s.left[i] *= gamma_dt;
    s.right[i] *= gamma_dt;
  }
  for (std::size_t l = 0; l < W; ++l) s.left[n * W + l] = s.right[n * W + l] = 0.0;
  for (std::size_t i = 0; i < n; ++i) {
    for (std::size_t l = 0; l < W; ++l) {
      double diagonal = mesh.volume_m[i] - s.right[i * W + l] + s.left[(i + 1) * W + l];
      // sub(i) = -left(i), super(i-1) = right(i)
      if (i > 0) diagonal += s.left[i * W + l] * s.right[i * W + l] * s.pivot[(i - 1) * W + l];
      s.pivot[i * W + l] = 1.0 / diagonal;
    }
  }
}

template <std::size_t W>
void solve(std::size_t n, const Scratch& s, double* __restrict x) {
  for (std::size_t l = 0; l < W; ++l) x[l] *= s.pivot[l];
  for (std::size_t i = 1; i < n; ++i)
    for (std::size_t l = 0; l < W; ++l)
      x[i * W + l] = (x[i * W + l] + s.left[i * W + l] * x[(i - 1) * W + l]) * s.pivot[i * W + l];
  for (std::size_t i = n - 1; i-- > 0;)
    for (std::size_t l = 0; l < W; ++l)
      x[i * W + l] -= s.right[(i + 1) * W + l] * s.pivot[i * W + l] * x[(i + 1) * W + l];
}

template <std::size_t W>
void advance_block(const Mesh& mesh, std::span<const LaneConditions> conditions, double dt,
                   double* __restrict u, double* __restrict crossed, const Scratch& s) {
  const Lanes<W> lanes(conditions);
  const std::size_t n = mesh.cells();
  const std::size_t values = n * W;
  evaluate<W, true>(mesh, lanes, u, s);
  factor<W>(mesh, gamma * dt, s);
  std::array<double, W> surface_1{};
  for (std::size_t l = 0; l < W; ++l) surface_1[l] = s.flux[l];
  for (std::size_t i = 0; i < values; ++i) s.k1[i] = s.flux[i] - s.flux[i + W];
  solve<W>(n, s, s.k1);
  // The carbon a stage moves through the surface: the sum over V k of its linear system, read at the
  // surface only, so that the balance residual compares two independent numbers.
  for (std::size_t l = 0; l < W; ++l) surface_1[l] += s.right[l] * s.k1[l];
  for (std::size_t i = 0; i < values; ++i) s.trial[i] = u[i] + dt * s.k1[i];
  evaluate<W, false>(mesh, lanes, s.trial, s);
  for (std::size_t i = 0; i < n; ++i)
    for (std::size_t l = 0; l < W; ++l) {
      const std::size_t at = i * W + l;
      s.k2[at] = s.flux[at] - s.flux[at + W] - 2.0 * mesh.volume_m[i] * s.k1[at];
    }
  solve<W>(n, s, s.k2);
  for (std::size_t l = 0; l < W; ++l) {
    const double surface_2 = s.flux[l] - 2.0 * surface_1[l] + s.right[l] * s.k2[l];
    crossed[l] += dt * (1.5 * surface_1[l] + 0.5 * surface_2);
  }
  for (std::size_t i = 0; i < values; ++i) u[i] += dt * (1.5 * s.k1[i] + 0.5 * s.k2[i]);
}

}  // namespace

CarbonField::CarbonField(std::shared_ptr<const Mesh> m, std::size_t lane_count, double carbon)
    : mesh(std::move(m)), lanes(lane_count), width(lane_count == 1 ? 1 : block) {
  const std::size_t blocks = (lanes + width - 1) / width;
  values.assign(blocks * width * mesh->cells(), carbon);
  crossed_wt_pct_m.assign(blocks * width, 0.0);
}

double CarbonField::inventory_wt_pct_m(std::size_t lane) const {
  double sum = 0.0;
  for (std::size_t i = mesh->cells(); i-- > 0;) sum += mesh->volume_m[i] * carbon_wt_pct(lane, i);
  return sum;
}

DiffusionStepper::DiffusionStepper(std::size_t cells, std::size_t lanes) {
  const std::size_t width = lanes == 1 ? 1 : CarbonField::block;
  for (auto* v : {&slope_left_, &slope_right_, &flux_, &pivot_, &k1_, &k2_, &trial_})
    v->assign((cells + 1) * width, 0.0);
}

void DiffusionStepper::step(CarbonField& field, std::span<const LaneConditions> conditions, double dt_s) {
  assert(conditions.size() == field.lanes);
  const Mesh& mesh = *field.mesh;
  const Scratch scratch{slope_left_.data(), slope_right_.data(), flux_.data(), pivot_.data(),
                        k1_.data(),         k2_.data(),          trial_.data()};
  for (std::size_t first = 0; first < field.lanes; first += field.width) {
    double* u = field.values.data() + first * mesh.cells();
    double* crossed = field.crossed_wt_pct_m.data() + first;
    if (field.width == 1)
      advance_block<1>(mesh, conditions.subspan(first), dt_s, u, crossed, scratch);
    else
      advance_block<CarbonField::block>(mesh, conditions.subspan(first), dt_s, u, crossed, scratch);
  }
  ++work_.steps;
  work_.cell_evaluations += 2 * mesh.cells() * field.lanes;
}

SurfaceState surface_state(const CarbonField& field, std::size_t lane, const LaneConditions& conditions) {
  const double c = field.carbon_wt_pct(lane, 0);
  const double metal = 0.5 * field.mesh->face_m[1] / diffusivity_m2_s(conditions.diffusivity, c);
  const SurfaceCondition& s = conditions.surface;
  SurfaceState state;
  state.flux_wt_pct_m_per_s =
      s.forced_wt_pct_m_per_s + (s.equilibrium_wt_pct - c) / (s.resistance_s_per_m + metal);
  state.carbon_wt_pct = c + state.flux_wt_pct_m_per_s * metal;
  return state;
}

}  // namespace hearthfront::solver
