// The step of W lanes side by side (field.h says what is solved, mesh.h how it is discretised). Private to
// the builds of the kernel (kernel.h). Written once for all widths, in packs: every width does the same
// operations in the same order, so that a lane's bits do not depend on its company.
//
// Rows are taken from both ends at once towards the middle (a twisted factorisation) and back: two chains of
// dependent divisions of half the length, which counts where one lane runs alone. Seen from either end a row
// has a neighbour behind (nearer that end) and one ahead (nearer the middle).
#pragma once

#include <cstddef>

#include "solver/diffusion/kernel.h"
#include "solver/diffusion/potential.h"

namespace hearthfront::solver {
inline namespace HF_KERNEL_BUILD {
namespace kernel {

inline constexpr double gamma = 0.29289321881345247560;  // 1 - 1/sqrt(2)

// Of every node: `behind` and `ahead` are the off-diagonals times the reciprocal pivot `inverse`.
struct Scratch {
  double *behind, *ahead, *inverse, *diffusivity, *phi, *k1, *k2;
};

// One end's way towards the middle. Forward: `towards` is +1 from the surface, -1 from the centre.
template <std::size_t W, int towards>
struct Sweep {
  using P = Pack<W>;
  P flux;               // into the next row from behind
  P x{P::all(0.0)};     // solution of the last row, as far as it is known
  P lost{P::all(0.0)};  // gamma dt g D of the last row, towards the next one
  P own;                // gamma dt g D of the next row, towards the last one; at the surface, its film
  P ahead{P::all(0.0)}, inverse{P::all(0.0)};  // of the last row

  // Makes the row of M + gamma dt K diag(D), eliminates what is behind, and takes the right side along.
  HF_INLINE void factor(std::size_t i, const BlockStep& b, double gamma_dt, const Scratch& s) {
    const std::size_t at = i * W, next = towards > 0 ? at + W : at - W;
    const double g = b.conductance_per_m[towards > 0 ? i + 1 : i];
    const P out = g * (P::load(s.phi + at) - P::load(s.phi + next));
    const P to_next = (gamma_dt * g) * P::load(s.diffusivity + at);
    const P from_next = (gamma_dt * g) * P::load(s.diffusivity + next);
    const P behind = P::all((towards > 0 ? b.mass_lower_m : b.mass_upper_m)[i]) - lost;
    const P eliminated = behind * ahead;
    ahead = P::all((towards > 0 ? b.mass_upper_m : b.mass_lower_m)[i]) - from_next;
    const P pivot = (P::all(b.mass_diagonal_m[i]) + own) + to_next;
    inverse = 1.0 / fused(-eliminated, inverse, pivot);
    inverse.store(s.inverse + at);
    const P scaled = behind * inverse;
    scaled.store(s.behind + at);
    (ahead * inverse).store(s.ahead + at);
    x = fused(-scaled, x, (flux - out) * inverse);
    x.store(s.k1 + at);
    flux = out;
    lost = to_next;
    own = from_next;
  }

  // The right side alone, through rows that are factored.
  HF_INLINE void forward(std::size_t i, const BlockStep& b, const Scratch& s, double* __restrict to) {
    const std::size_t at = i * W, next = towards > 0 ? at + W : at - W;
    const double g = b.conductance_per_m[towards > 0 ? i + 1 : i];
    const P out = g * (P::load(s.phi + at) - P::load(s.phi + next));
    x = fused(-P::load(s.behind + at), x, (flux - out) * P::load(s.inverse + at));
    x.store(to + at);
    flux = out;
  }
};

// (M + gamma dt K diag(D)) k1 = divergence of phi + flux at the surface, as far as the middle, which is
// solved.
template <std::size_t W>
HF_INLINE void factor_and_sweep(const BlockStep& b, double gamma_dt, const Pack<W>& film,
                                const Pack<W>& surface_flux, const Scratch& s) {
  using P = Pack<W>;
  const std::size_t n = b.nodes, middle = n / 2;  // one more row on the left of it than on the right
  Sweep<W, +1> left{.flux = surface_flux, .own = film};
  Sweep<W, -1> right{.flux = P::all(0.0), .own = P::all(0.0)};
  for (std::size_t i = 0; i + 1 < middle; ++i) {
    left.factor(i, b, gamma_dt, s);
    right.factor(n - 1 - i, b, gamma_dt, s);
  }
  left.factor(middle - 1, b, gamma_dt, s);
  const std::size_t m = middle * W;
  const P lower = P::all(b.mass_lower_m[middle]) - left.lost;
  const P upper = P::all(b.mass_upper_m[middle]) - right.lost;
  const P pivot = (P::all(b.mass_diagonal_m[middle]) + left.own) + right.own;
  const P from_left = fused(-(lower * left.ahead), left.inverse, pivot);
  const P inverse = 1.0 / fused(-(upper * right.ahead), right.inverse, from_left);
  const P behind = lower * inverse, ahead = upper * inverse;
  inverse.store(s.inverse + m);
  behind.store(s.behind + m);
  ahead.store(s.ahead + m);
  fused(-ahead, right.x, fused(-behind, left.x, (left.flux + right.flux) * inverse)).store(s.k1 + m);
}

// The same for another phi and the factors that factor_and_sweep left.
template <std::size_t W>
HF_INLINE void sweep(const BlockStep& b, const Pack<W>& surface_flux, const Scratch& s,
                     double* __restrict to) {
  using P = Pack<W>;
  const std::size_t n = b.nodes, middle = n / 2;
  Sweep<W, +1> left{.flux = surface_flux, .own = P::all(0.0)};
  Sweep<W, -1> right{.flux = P::all(0.0), .own = P::all(0.0)};
  for (std::size_t i = 0; i + 1 < middle; ++i) {
    left.forward(i, b, s, to);
    right.forward(n - 1 - i, b, s, to);
  }
  left.forward(middle - 1, b, s, to);
  const std::size_t m = middle * W;
  const P net = (left.flux + right.flux) * P::load(s.inverse + m);
  fused(-P::load(s.ahead + m), right.x, fused(-P::load(s.behind + m), left.x, net)).store(to + m);
}

// From the middle outwards.
template <std::size_t W>
HF_INLINE void back(std::size_t n, const Scratch& s, double* __restrict x) {
  using P = Pack<W>;
  const std::size_t middle = n / 2;
  P left = P::load(x + middle * W), right = left;
  const auto outward = [&](std::size_t i, P& inner) {
    inner = fused(-P::load(s.ahead + i), inner, P::load(x + i));
    inner.store(x + i);
  };
  for (std::size_t i = 1; i < middle; ++i) {
    outward((middle - i) * W, left);
    outward((middle + i) * W, right);
  }
  outward(0, left);
}

// With A = M - gamma dt J the stages are A k1 = F(u), A k2 = F(u + dt k1) - 2 M k1, and u + dt (3 k1 + k2)/2
// is next. Solved here for k2 + 2 k1, whose right side F(u + dt k1) - 2 gamma dt J k1 is again the
// divergence of a potential: no product with M, and the same flux form.
//
// A damped step is one linearly implicit Euler stage, (M - dt J) k1 = F(u), u + dt k1: of first order, but
// without the first stage's reach of 1/gamma = 3.4 times the change, which a jump of the surface would throw
// far outside the range of D.
template <std::size_t W>
void step(const BlockStep& b) {
  using P = Pack<W>;
  const std::size_t n = b.nodes, doubles = n * W;
  double* const a = b.scratch;
  const Scratch s{
      a, a + doubles, a + 2 * doubles, a + 3 * doubles, a + 4 * doubles, a + 5 * doubles, a + 6 * doubles};
  double* const u = b.carbon_wt_pct;
  double* const crossed = b.crossed_wt_pct_m;
  const double dt = b.dt_s, gamma_dt = b.damped ? dt : gamma * dt;
  const auto lane = [&](std::size_t l) -> const LaneConditions& {
    return b.conditions[l < b.lanes ? l : b.lanes - 1];
  };
  const LawOfLanes<W> law([&](std::size_t l) -> const DiffusivityForm& { return lane(l).diffusivity; });
  const Potential<W> potential(law);
  const P equilibrium = P::from([&](std::size_t l) { return lane(l).surface.equilibrium_wt_pct; });
  const P forced = P::from([&](std::size_t l) { return lane(l).surface.forced_wt_pct_m_per_s; });
  const P resistance = P::from([&](std::size_t l) { return lane(l).surface.resistance_s_per_m; });
  const P transfer =
      1.0 / (resistance + P::all(least_film * b.first_spacing_m) / law.template at<W>(equilibrium));
  const P film = gamma_dt * transfer;

  in_packs<W>(n, [&](std::size_t at, auto width) {
    using C = Pack<decltype(width)::value>;
    C d;
    potential.value(C::load(u + at), d).store(s.phi + at);
    d.store(s.diffusivity + at);
  });
  const P flux_1 = fused(equilibrium - P::load(u), transfer, forced);
  factor_and_sweep<W>(b, gamma_dt, film, flux_1, s);
  back<W>(n, s, s.k1);

  const P rate_0 = P::load(s.k1);
  if (b.damped) {
    fused(dt, fused(-film, rate_0, flux_1), P::load(crossed)).store(crossed);
    in_packs<W>(n, [&](std::size_t at, auto width) {
      using C = Pack<decltype(width)::value>;
      fused(dt, C::load(s.k1 + at), C::load(u + at)).store(u + at);
    });
    return;
  }

  in_packs<W>(n, [&](std::size_t at, auto width) {
    using C = Pack<decltype(width)::value>;
    const C rate = C::load(s.k1 + at);
    const C next = potential.value(fused(dt, rate, C::load(u + at)));
    fused((-2.0 * gamma_dt) * C::load(s.diffusivity + at), rate, next).store(s.phi + at);
  });
  const P u_0 = fused(dt, rate_0, P::load(u));
  const P flux_2 = fused(2.0 * film, rate_0, fused(equilibrium - u_0, transfer, forced));
  sweep<W>(b, flux_2, s, s.k2);
  back<W>(n, s, s.k2);

  // What crossed is read at the surface alone, so that the balance residual compares two independent numbers.
  const double half_dt = 0.5 * dt;
  const P flux = fused(-film, rate_0 + P::load(s.k2), flux_1 + flux_2);
  fused(half_dt, flux, P::load(crossed)).store(crossed);
  in_packs<W>(n, [&](std::size_t at, auto width) {
    using C = Pack<decltype(width)::value>;
    fused(half_dt, C::load(s.k1 + at) + C::load(s.k2 + at), C::load(u + at)).store(u + at);
  });
}

}  // namespace kernel
}  // namespace HF_KERNEL_BUILD
}  // namespace hearthfront::solver
