// Kirchhoff's potential Phi(C) = int D dC of the lanes of one block, as a polynomial in C: fluxes between
// nodes are then plain differences of Phi, and D is its derivative. Private to the step and to the measures.
//
// The law D(C) at one temperature is interpolated at ten Chebyshev points of 0-1.6 wt% carbon: within 1e-7 of
// the law there, within 1e-5 up to 1.9 wt%, for 1000-1600 K (tests/solver). Cheaper than the law's own
// exponential at every node, and the same bits alone or in a lane.
#pragma once

#include <array>
#include <cstddef>

#include "solver/diffusion/fast_exp.h"
#include "solver/diffusion/pack.h"
#include "solver/material/diffusivity.h"

namespace hearthfront::solver {

inline constexpr double potential_centre_wt_pct = 0.8;
inline constexpr double potential_half_range_wt_pct = 0.8;

namespace potential_detail {

// The points come in pairs +-s; even and odd part are each a polynomial of degree 4 in t = s^2.
inline constexpr std::array<double, 5> point{0.15643446504023087, 0.45399049973954680, 0.70710678118654752,
                                             0.89100652418836787, 0.98768834059513773};  // cos((2k+1) pi/20)

// Column k: the coefficients in t of the Lagrange polynomial that is 1 at point k and 0 at the others.
constexpr std::array<std::array<double, 5>, 5> lagrange_coefficients() {
  std::array<std::array<double, 5>, 5> result{};
  for (std::size_t k = 0; k < 5; ++k) {
    std::array<double, 5> poly{1.0};
    std::size_t degree = 0;
    const double here = point[k] * point[k];
    for (std::size_t other = 0; other < 5; ++other) {
      if (other == k) continue;
      const double root = point[other] * point[other];
      ++degree;
      for (std::size_t m = degree + 1; m-- > 0;) {
        const double shifted = m > 0 ? poly[m - 1] : 0.0;
        const double kept = m < degree ? poly[m] : 0.0;
        poly[m] = (shifted - root * kept) / (here - root);
      }
    }
    for (std::size_t m = 0; m < 5; ++m) result[m][k] = poly[m];
  }
  return result;
}
inline constexpr auto lagrange = lagrange_coefficients();

}  // namespace potential_detail

// Phi = sum c[k] s^k with s = C - centre, for W lanes. All forms share rise and fold. Values are computed on
// chunks: one node of several lanes, or two nodes of one.
template <std::size_t W>
class Potential {
  using P = Pack<W>;

 public:
  using Chunk = Pack<(W > 1 ? W : 2)>;

  // `form(l)` gives the diffusivity form of lane l.
  template <class FormOfLane>
  explicit Potential(FormOfLane form) {
    using namespace potential_detail;
    std::array<double, W> hump, scale, exponent, slope;
    for (std::size_t l = 0; l < W; ++l) {
      hump[l] = form(l).hump;
      scale[l] = form(l).scale;
      exponent[l] = form(l).exponent;
      slope[l] = form(l).slope;
    }
    const double rise = form(0).rise, fold = form(0).fold;
    std::array<P, 5> even, odd;
    for (std::size_t k = 0; k < 5; ++k) {
      const double step = potential_half_range_wt_pct * point[k];
      std::array<double, W> high, low;
      const auto fill = [&](double carbon, std::array<double, W>& d) {
        const double z = rise * carbon / (1.0 - fold * carbon);
        const double bulge = z * (1.0 - z);
        for (std::size_t l = 0; l < W; ++l)
          d[l] = scale[l] * (1.0 + hump[l] * bulge) * fast_exp(exponent[l] + slope[l] * z);
      };
      fill(potential_centre_wt_pct + step, high);
      fill(potential_centre_wt_pct - step, low);
      const P d_high = P::from([&](std::size_t l) { return high[l]; });
      const P d_low = P::from([&](std::size_t l) { return low[l]; });
      even[k] = 0.5 * (d_high + d_low);
      odd[k] = (0.5 / step) * (d_high - d_low);
    }
    std::array<P, terms> c;
    c[0] = P::all(0.0);
    double unit = 1.0;  // half range to the power -2m
    for (std::size_t m = 0; m < 5; ++m) {
      P e = lagrange[m][0] * even[0], o = lagrange[m][0] * odd[0];
      for (std::size_t k = 1; k < 5; ++k) {
        e += lagrange[m][k] * even[k];
        o += lagrange[m][k] * odd[k];
      }
      c[2 * m + 1] = (unit / static_cast<double>(2 * m + 1)) * e;
      c[2 * m + 2] = (unit / static_cast<double>(2 * m + 2)) * o;
      unit /= potential_half_range_wt_pct * potential_half_range_wt_pct;
    }
    for (std::size_t k = 0; k < terms; ++k) {
      std::array<double, W> lane;
      c[k].store(lane.data());
      c_[k] = Chunk::from([&](std::size_t i) { return lane[i % W]; });
    }
  }

  Chunk value(const Chunk& carbon) const {
    const Chunk s = carbon - Chunk::all(potential_centre_wt_pct);
    Chunk p = c_[terms - 1];
    for (std::size_t k = terms - 1; k-- > 0;) p = p * s + c_[k];
    return p;
  }

  // Phi, and D beside it.
  Chunk value(const Chunk& carbon, Chunk& diffusivity) const {
    const Chunk s = carbon - Chunk::all(potential_centre_wt_pct);
    Chunk p = c_[terms - 1], d = p;
    for (std::size_t k = terms - 1; k-- > 1;) {
      p = p * s + c_[k];
      d = d * s + p;
    }
    diffusivity = d;
    return p * s + c_[0];
  }

 private:
  static constexpr std::size_t terms = 11;
  std::array<Chunk, terms> c_;
};

}  // namespace hearthfront::solver
