// The step of W lanes side by side (field.h says what is solved, mesh.h how it is discretised). Private to
// field.cpp. Written once for all widths, in packs: every width does the same operations in the same order,
// so that a lane's bits do not depend on its company. No allocation, no exception; NaN in gives NaN out.
#pragma once

#include <cstddef>
#include <span>

#include "solver/diffusion/field.h"
#include "solver/diffusion/potential.h"

namespace hearthfront::solver::kernel {

inline constexpr double gamma = 0.29289321881345247560;  // 1 - 1/sqrt(2)

struct Scratch {
  double *lower, *upper, *pivot, *diffusivity, *phi, *k1, *k2;
};

// Passes without dependence between nodes go in chunks: one node of W lanes, or two nodes of one lane (the
// mesh has an even number). A chunk at double index at = node * W; its neighbours are W further.
template <std::size_t W>
using Chunk = typename Potential<W>::Chunk;

// A quantity of the mesh for the chunk that begins at this node.
template <std::size_t W>
Chunk<W> of_nodes(const double* quantity, std::size_t node) {
  if constexpr (W == 1)
    return Chunk<W>::load(quantity + node);
  else
    return Chunk<W>::all(quantity[node]);
}

// Row differences of a potential: flux in minus flux out, nothing added at the surface.
template <std::size_t W>
void divergence(const Mesh& mesh, const double* __restrict phi, double* __restrict net) {
  using C = Chunk<W>;
  using P = Pack<W>;
  const std::size_t n = mesh.nodes();
  const double* __restrict g = mesh.conductance_per_m.data();
  const auto flux_into = [&](std::size_t i) {
    return of_nodes<W>(g, i) * (C::load(phi + (i - 1) * W) - C::load(phi + i * W));
  };
  (g[1] * (P::load(phi + W) - P::load(phi))).store(net);
  [[maybe_unused]] C in = flux_into(1);
  if constexpr (W == 1) {
    for (std::size_t i = 1; i + 1 < n; i += 2) (flux_into(i) - flux_into(i + 1)).store(net + i);
  } else {
    for (std::size_t i = 1; i + 1 < n; ++i) {
      const C out = flux_into(i + 1);
      (in - out).store(net + i * W);
      in = out;
    }
  }
  const std::size_t end = (n - 1) * W;
  (g[n - 1] * (P::load(phi + end - W) - P::load(phi + end))).store(net + end);
}

// The rows of M + gamma dt K diag(D), without the surface.
template <std::size_t W>
void assemble(const Mesh& mesh, double gamma_dt, const Scratch& s) {
  using C = Chunk<W>;
  using P = Pack<W>;
  const std::size_t n = mesh.nodes();
  const double* __restrict g = mesh.conductance_per_m.data();
  const double* __restrict d = s.diffusivity;
  double* __restrict lower = s.lower;
  double* __restrict upper = s.upper;
  double* __restrict pivot = s.pivot;
  P::all(0.0).store(lower);
  (P::all(mesh.mass_upper_m[0]) - (gamma_dt * g[1]) * P::load(d + W)).store(upper);
  (P::all(mesh.mass_diagonal_m[0]) + (gamma_dt * g[1]) * P::load(d)).store(pivot);
  for (std::size_t i = 1; i + 1 < n; i += C::size / W) {
    const std::size_t at = i * W;
    const C outer = gamma_dt * of_nodes<W>(g, i), inner = gamma_dt * of_nodes<W>(g, i + 1);
    (of_nodes<W>(mesh.mass_lower_m.data(), i) - outer * C::load(d + at - W)).store(lower + at);
    (of_nodes<W>(mesh.mass_upper_m.data(), i) - inner * C::load(d + at + W)).store(upper + at);
    (of_nodes<W>(mesh.mass_diagonal_m.data(), i) + (outer + inner) * C::load(d + at)).store(pivot + at);
  }
  const std::size_t end = (n - 1) * W;
  (P::all(mesh.mass_lower_m[n - 1]) - (gamma_dt * g[n - 1]) * P::load(d + end - W)).store(lower + end);
  P::all(0.0).store(upper + end);
  (P::all(mesh.mass_diagonal_m[n - 1]) + (gamma_dt * g[n - 1]) * P::load(d + end)).store(pivot + end);
}

// Twisted factorisation: elimination from both ends at once, which halves the chain of dependent divisions
// where one lane runs alone. Left behind: reciprocal pivots, and off-diagonals multiplied by them.
template <std::size_t W>
void factor(std::size_t n, const Scratch& s) {
  using P = Pack<W>;
  double* __restrict lower = s.lower;
  double* __restrict upper = s.upper;
  double* __restrict pivot = s.pivot;
  const std::size_t middle = n / 2;  // one more row on the left of it than on the right
  P left = P::all(0.0), right = left;
  const auto row_of_left = [&](std::size_t i) {
    const P low = P::load(lower + i * W);
    const P inverse = 1.0 / (P::load(pivot + i * W) - low * left);
    inverse.store(pivot + i * W);
    (low * inverse).store(lower + i * W);
    left = P::load(upper + i * W) * inverse;
    left.store(upper + i * W);
  };
  for (std::size_t i = 0; i + 1 < middle; ++i) {
    row_of_left(i);
    const std::size_t j = (n - 1 - i) * W;
    const P up = P::load(upper + j);
    const P inverse = 1.0 / (P::load(pivot + j) - up * right);
    inverse.store(pivot + j);
    (up * inverse).store(upper + j);
    right = P::load(lower + j) * inverse;
    right.store(lower + j);
  }
  row_of_left(middle - 1);
  const std::size_t m = middle * W;
  const P low = P::load(lower + m), up = P::load(upper + m);
  const P inverse = 1.0 / (P::load(pivot + m) - low * left - up * right);
  inverse.store(pivot + m);
  (low * inverse).store(lower + m);
  (up * inverse).store(upper + m);
}

template <std::size_t W>
void solve(std::size_t n, const Scratch& s, double* __restrict x) {
  using P = Pack<W>;
  const double* __restrict lower = s.lower;
  const double* __restrict upper = s.upper;
  const double* __restrict pivot = s.pivot;
  const std::size_t middle = n / 2;
  P left = P::all(0.0), right = left;
  const auto inward_left = [&](std::size_t i) {
    left = P::load(x + i) * P::load(pivot + i) - P::load(lower + i) * left;
    left.store(x + i);
  };
  for (std::size_t i = 0; i + 1 < middle; ++i) {
    inward_left(i * W);
    const std::size_t j = (n - 1 - i) * W;
    right = P::load(x + j) * P::load(pivot + j) - P::load(upper + j) * right;
    right.store(x + j);
  }
  inward_left((middle - 1) * W);
  const std::size_t m = middle * W;
  left = P::load(x + m) * P::load(pivot + m) - P::load(lower + m) * left - P::load(upper + m) * right;
  right = left;
  left.store(x + m);
  const auto outward_left = [&](std::size_t i) {
    left = P::load(x + i) - P::load(upper + i) * left;
    left.store(x + i);
  };
  for (std::size_t i = 1; i < middle; ++i) {
    outward_left((middle - i) * W);
    const std::size_t j = (middle + i) * W;
    right = P::load(x + j) - P::load(lower + j) * right;
    right.store(x + j);
  }
  outward_left(0);
}

// With A = M - gamma dt J the stages are A k1 = F(u), A k2 = F(u + dt k1) - 2 M k1, and u + dt (3 k1 + k2)/2
// is next. Solved here for k2 + 2 k1, whose right side F(u + dt k1) - 2 gamma dt J k1 is again the
// divergence of a potential: no product with M, and the same flux form.
//
// A damped step is one linearly implicit Euler stage, (M - dt J) k1 = F(u), u + dt k1: of first order, but
// without the first stage's reach of 1/gamma = 3.4 times the change, which a jump of the surface would throw
// far outside the range of D.
template <std::size_t W>
void advance_block(const Mesh& mesh, std::span<const LaneConditions> conditions, double dt, bool damped,
                   double* __restrict u, double* __restrict crossed, const Scratch& s) {
  using P = Pack<W>;
  using C = Chunk<W>;
  const std::size_t n = mesh.nodes();
  const double gamma_dt = damped ? dt : gamma * dt;
  // Spare lanes repeat the last.
  const auto lane = [&](std::size_t l) -> const LaneConditions& {
    return conditions[l < conditions.size() ? l : conditions.size() - 1];
  };
  const Potential<W> potential([&](std::size_t l) -> const DiffusivityForm& { return lane(l).diffusivity; });
  const P equilibrium = P::from([&](std::size_t l) { return lane(l).surface.equilibrium_wt_pct; });
  const P forced = P::from([&](std::size_t l) { return lane(l).surface.forced_wt_pct_m_per_s; });
  const P transfer = P::from([&](std::size_t l) { return surface_transfer_m_per_s(mesh, lane(l)); });
  const P damping = gamma_dt * transfer;

  double* __restrict diffusivity = s.diffusivity;
  double* __restrict phi = s.phi;
  double* __restrict k1 = s.k1;
  double* __restrict k2 = s.k2;
  for (std::size_t i = 0; i < n * W; i += C::size) {
    C d;
    potential.value(C::load(u + i), d).store(phi + i);
    d.store(diffusivity + i);
  }
  assemble<W>(mesh, gamma_dt, s);
  (P::load(s.pivot) + damping).store(s.pivot);
  factor<W>(n, s);
  divergence<W>(mesh, phi, k1);
  const P flux_1 = forced + (equilibrium - P::load(u)) * transfer;
  (P::load(k1) + flux_1).store(k1);
  solve<W>(n, s, k1);

  const P rate_0 = P::load(k1);
  if (damped) {
    (P::load(crossed) + dt * (flux_1 - damping * rate_0)).store(crossed);
    for (std::size_t i = 0; i < n * W; i += C::size) (C::load(u + i) + dt * C::load(k1 + i)).store(u + i);
    return;
  }

  const C step = C::all(dt), weight = C::all(2.0 * gamma_dt);
  for (std::size_t i = 0; i < n * W; i += C::size) {
    const C rate = C::load(k1 + i);
    const C next = potential.value(C::load(u + i) + step * rate);
    (next - weight * C::load(diffusivity + i) * rate).store(phi + i);
  }
  divergence<W>(mesh, phi, k2);
  const P flux_2 = forced + (equilibrium - (P::load(u) + dt * rate_0)) * transfer + 2.0 * damping * rate_0;
  (P::load(k2) + flux_2).store(k2);
  solve<W>(n, s, k2);

  // What crossed is read at the surface alone, so that the balance residual compares two independent numbers.
  const double half_dt = 0.5 * dt;
  const P flux = flux_1 + flux_2 - damping * (rate_0 + P::load(k2));
  (P::load(crossed) + half_dt * flux).store(crossed);
  const C half = C::all(half_dt);
  for (std::size_t i = 0; i < n * W; i += C::size)
    (C::load(u + i) + half * (C::load(k1 + i) + C::load(k2 + i))).store(u + i);
}

}  // namespace hearthfront::solver::kernel
