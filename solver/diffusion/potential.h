// Kirchhoff's potential Phi(C) = int D dC of the lanes of one block, as a polynomial in C: fluxes between
// nodes are then plain differences of Phi, and D is its derivative. Private to the step and to the measures.
//
// The law D(C) at one temperature is interpolated at ten Chebyshev points of 0-1.6 wt% carbon: within 1e-7 of
// the law there, within 1e-5 up to 1.9 wt%, for 1000-1600 K (tests/solver). Cheaper than the law's own
// exponential at every node, and the same bits alone or in a lane.
#pragma once

#include <cstddef>

#include "solver/diffusion/fast_exp.h"
#include "solver/diffusion/pack.h"
#include "solver/material/diffusivity.h"

namespace hearthfront::solver {
inline namespace HF_KERNEL_BUILD {

inline constexpr double potential_centre_wt_pct = 0.8;
inline constexpr double potential_half_range_wt_pct = 0.8;

namespace potential_detail {

// The points come in pairs +-s; even and odd part are each a polynomial of degree 4 in t = s^2.
inline constexpr double point[5]{0.15643446504023087, 0.45399049973954680, 0.70710678118654752,
                                 0.89100652418836787, 0.98768834059513773};  // cos((2k+1) pi/20)

// The carbons at which the law is asked, those above the centre first, and 1 / (high - low) of each pair.
struct Points {
  double carbon_wt_pct[10], inverse_distance[5];
};
constexpr Points points_of_law() {
  Points result{};
  for (std::size_t k = 0; k < 5; ++k) {
    const double step = potential_half_range_wt_pct * point[k];
    result.carbon_wt_pct[k] = potential_centre_wt_pct + step;
    result.carbon_wt_pct[k + 5] = potential_centre_wt_pct - step;
    result.inverse_distance[k] = 0.5 / step;
  }
  return result;
}
inline constexpr Points points = points_of_law();

struct Matrix {
  double row[5][5];
};

// Column k: the coefficients in t of the Lagrange polynomial that is 1 at point k and 0 at the others.
constexpr Matrix lagrange_coefficients() {
  Matrix result{};
  for (std::size_t k = 0; k < 5; ++k) {
    double poly[5]{1.0};
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
    for (std::size_t m = 0; m < 5; ++m) result.row[m][k] = poly[m];
  }
  return result;
}
inline constexpr Matrix lagrange = lagrange_coefficients();

}  // namespace potential_detail

// The law itself for W lanes (diffusivity.h says the form), which share rise and fold.
template <std::size_t W>
struct LawOfLanes {
  using P = Pack<W>;

  // `form(l)` gives the diffusivity form of lane l.
  template <class FormOfLane>
  HF_INLINE explicit LawOfLanes(FormOfLane form)
      : rise(form(0).rise),
        fold(form(0).fold),
        hump(P::from([&](std::size_t l) { return form(l).hump; })),
        scale(P::from([&](std::size_t l) { return form(l).scale; })),
        exponent(P::from([&](std::size_t l) { return form(l).exponent; })),
        slope(P::from([&](std::size_t l) { return form(l).slope; })) {}

  template <std::size_t V>
  HF_INLINE Pack<V> at(const Pack<V>& carbon) const {
    const Pack<V> one = Pack<V>::all(1.0);
    const Pack<V> z = (rise * carbon) / fused(-fold, carbon, one);
    const Pack<V> bulge = z * (one - z);
    return spread<V>(scale) * fused(spread<V>(hump), bulge, one) *
           fast_exp(fused(spread<V>(slope), z, spread<V>(exponent)));
  }

  // One lane may be asked at several carbons at once.
  template <std::size_t V>
  HF_INLINE static Pack<V> spread(const P& quantity) {
    static_assert(V == W || W == 1);
    if constexpr (V == W)
      return quantity;
    else
      return Pack<V>::all(quantity.unit);
  }

  double rise, fold;
  P hump, scale, exponent, slope;
};

// Phi = sum c[k] s^k with s = C - centre, for W lanes. Values are computed for one node of W lanes, or for
// several nodes of one lane at once.
template <std::size_t W>
class Potential {
  using P = Pack<W>;

 public:
  template <class FormOfLane>
  HF_INLINE explicit Potential(FormOfLane form) : Potential(LawOfLanes<W>(form)) {}

  HF_INLINE explicit Potential(const LawOfLanes<W>& law) {
    using namespace potential_detail;
    alignas(W * sizeof(double)) double d[10 * W];
    in_packs<W>(10, [&](std::size_t at, auto width) {
      using C = Pack<decltype(width)::value>;
      const C carbon = W == 1 ? C::load(points.carbon_wt_pct + at) : C::all(points.carbon_wt_pct[at / W]);
      law.template at<C::size>(carbon).store(d + at);
    });
    P even[5], odd[5];
    for (std::size_t k = 0; k < 5; ++k) {
      const P high = P::load(d + k * W), low = P::load(d + (k + 5) * W);
      even[k] = 0.5 * (high + low);
      odd[k] = points.inverse_distance[k] * (high - low);
    }
    set(0, P::all(0.0));
    double unit = 1.0;  // half range to the power -2m
    for (std::size_t m = 0; m < 5; ++m) {
      P e = lagrange.row[m][0] * even[0], o = lagrange.row[m][0] * odd[0];
      for (std::size_t k = 1; k < 5; ++k) {
        e = fused(lagrange.row[m][k], even[k], e);
        o = fused(lagrange.row[m][k], odd[k], o);
      }
      set(2 * m + 1, (unit / static_cast<double>(2 * m + 1)) * e);
      set(2 * m + 2, (unit / static_cast<double>(2 * m + 2)) * o);
      unit /= potential_half_range_wt_pct * potential_half_range_wt_pct;
    }
  }

  template <std::size_t V>
  HF_INLINE Pack<V> value(const Pack<V>& carbon) const {
    const Pack<V> s = carbon - Pack<V>::all(potential_centre_wt_pct);
    Pack<V> p = coefficient<V>(terms - 1);
    for (std::size_t k = terms - 1; k-- > 0;) p = fused(p, s, coefficient<V>(k));
    return p;
  }

  // Phi, and D beside it.
  template <std::size_t V>
  HF_INLINE Pack<V> value(const Pack<V>& carbon, Pack<V>& diffusivity) const {
    const Pack<V> s = carbon - Pack<V>::all(potential_centre_wt_pct);
    Pack<V> p = coefficient<V>(terms - 1), d = p;
    for (std::size_t k = terms - 1; k-- > 1;) {
      p = fused(p, s, coefficient<V>(k));
      d = fused(d, s, p);
    }
    diffusivity = d;
    return fused(p, s, coefficient<V>(0));
  }

 private:
  static constexpr std::size_t terms = 11;
  // The coefficient of one lane is kept as often as the widest unit has doubles.
  static constexpr std::size_t kept = W == 1 ? widest : W;

  HF_INLINE void set(std::size_t k, const P& coefficient) {
    LawOfLanes<W>::template spread<kept>(coefficient).store(c_[k]);
  }
  template <std::size_t V>
  HF_INLINE Pack<V> coefficient(std::size_t k) const {
    static_assert(V == W || (W == 1 && V <= kept));
    return Pack<V>::load(c_[k]);
  }

  alignas(kept * sizeof(double)) double c_[terms][kept];
};

}  // namespace HF_KERNEL_BUILD
}  // namespace hearthfront::solver
