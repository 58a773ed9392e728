// W doubles that are computed on together, written out in the machine's own vectors so that nothing hangs on
// what the compiler recognises. Every operation is elementwise IEEE arithmetic: an element's result does not
// depend on W or on its neighbours. Private to the step kernel and to the measures.
//
// Everything here is compiled once for each build of the kernel and lives in a namespace of that build;
// no function of the standard library is used (kernel.h says why).
#pragma once

#include <cstddef>
#include <cstdint>

#if defined(HF_KERNEL_AVX2)
#if !defined(__AVX2__) || !defined(__FMA__)
#error "compile this file with -mavx2 -mfma"
#endif
#include <immintrin.h>
#endif
#if !defined(HF_KERNEL_BUILD)  // a program that compiles this with other options names its own
#if defined(HF_KERNEL_AVX2)
#define HF_KERNEL_BUILD avx2_fma
#else
#define HF_KERNEL_BUILD baseline
#endif
#endif

namespace hearthfront::solver {
inline namespace HF_KERNEL_BUILD {

// Small functions in the inner loops; called, they would pass packs through memory.
#define HF_INLINE [[gnu::always_inline]] inline

// The units that packs are made of. InMemory is a unit wherever a double may stand.
template <std::size_t W>
struct UnitOf {
  using Double [[gnu::vector_size(W * sizeof(double))]] = double;
  using Bits [[gnu::vector_size(W * sizeof(double))]] = std::uint64_t;
  using InMemory [[gnu::vector_size(W * sizeof(double)), gnu::aligned(8), gnu::may_alias]] = double;
};
template <>
struct UnitOf<1> {
  using Double = double;
  using Bits = std::uint64_t;
  using InMemory = double;
};

// a b + c: one rounding where the build has the instruction, two where it has not.
#if defined(HF_KERNEL_AVX2)
inline constexpr std::size_t widest = 4;

HF_INLINE double fused_unit(double a, double b, double c) {
  return __builtin_fma(a, b, c);
}
HF_INLINE __m128d fused_unit(__m128d a, __m128d b, __m128d c) {
  return _mm_fmadd_pd(a, b, c);
}
HF_INLINE __m256d fused_unit(__m256d a, __m256d b, __m256d c) {
  return _mm256_fmadd_pd(a, b, c);
}
#else
inline constexpr std::size_t widest = 2;

template <class Unit>
HF_INLINE Unit fused_unit(Unit a, Unit b, Unit c) {
  return a * b + c;
}
#endif

// One unit, or two halves. (An array of units would live in memory: the compiler takes only named members
// apart early enough.)
template <std::size_t W, bool one = (W <= widest)>
struct Parts {
  typename UnitOf<W>::Double unit;
};
template <std::size_t W>
struct Parts<W, false> {
  Parts<W / 2> low, high;
};

// Calls f(unit of a, units of b...) for each unit.
template <std::size_t W, class F, class... More>
HF_INLINE void each_unit(F f, Parts<W>& a, const More&... b) {
  if constexpr (W <= widest) {
    f(a.unit, b.unit...);
  } else {
    each_unit<W / 2>(f, a.low, b.low...);
    each_unit<W / 2>(f, a.high, b.high...);
  }
}

template <std::size_t W>
HF_INLINE void fill_parts(Parts<W>& p, double x) {
  using Double = typename UnitOf<W>::Double;
  if constexpr (W > widest) {
    fill_parts<W / 2>(p.low, x);
    p.high = p.low;
  } else if constexpr (W == 1) {
    p.unit = x;
  } else if constexpr (W == 2) {
    p.unit = Double{x, x};
  } else {
    p.unit = Double{x, x, x, x};
  }
}
template <std::size_t W>
HF_INLINE void load_parts(Parts<W>& p, const double* from) {
  if constexpr (W <= widest) {
    p.unit = *reinterpret_cast<const typename UnitOf<W>::InMemory*>(from);
  } else {
    load_parts<W / 2>(p.low, from);
    load_parts<W / 2>(p.high, from + W / 2);
  }
}
template <std::size_t W>
HF_INLINE void store_parts(const Parts<W>& p, double* to) {
  if constexpr (W <= widest) {
    *reinterpret_cast<typename UnitOf<W>::InMemory*>(to) = p.unit;
  } else {
    store_parts<W / 2>(p.low, to);
    store_parts<W / 2>(p.high, to + W / 2);
  }
}

template <std::size_t W>
struct Pack : Parts<W> {
  static constexpr std::size_t size = W;

  HF_INLINE static Pack all(double x) {
    Pack p;
    fill_parts<W>(p, x);
    return p;
  }
  // No alignment asked for.
  HF_INLINE static Pack load(const double* from) {
    Pack p;
    load_parts<W>(p, from);
    return p;
  }
  HF_INLINE void store(double* to) const { store_parts<W>(*this, to); }
  // One by one, for what is not in the inner loops.
  template <class F>
  HF_INLINE static Pack from(F value_of) {
    double each[W];
    for (std::size_t l = 0; l < W; ++l) each[l] = value_of(l);
    return load(each);
  }

  HF_INLINE Pack& operator+=(const Pack& b) {
    each_unit<W>([](auto& x, const auto& y) { x += y; }, *this, b);
    return *this;
  }
  HF_INLINE Pack& operator-=(const Pack& b) {
    each_unit<W>([](auto& x, const auto& y) { x -= y; }, *this, b);
    return *this;
  }
  HF_INLINE Pack& operator*=(const Pack& b) {
    each_unit<W>([](auto& x, const auto& y) { x *= y; }, *this, b);
    return *this;
  }
  HF_INLINE Pack& operator/=(const Pack& b) {
    each_unit<W>([](auto& x, const auto& y) { x /= y; }, *this, b);
    return *this;
  }
  HF_INLINE friend Pack operator+(Pack a, const Pack& b) { return a += b; }
  HF_INLINE friend Pack operator-(Pack a, const Pack& b) { return a -= b; }
  HF_INLINE friend Pack operator*(Pack a, const Pack& b) { return a *= b; }
  HF_INLINE friend Pack operator*(double a, const Pack& b) { return all(a) *= b; }
  HF_INLINE friend Pack operator/(Pack a, const Pack& b) { return a /= b; }
  HF_INLINE friend Pack operator/(double a, const Pack& b) { return all(a) /= b; }
  HF_INLINE friend Pack operator-(Pack a) {
    each_unit<W>([](auto& x) { x = -x; }, a);
    return a;
  }
};

template <std::size_t W>
HF_INLINE Pack<W> fused(Pack<W> a, const Pack<W>& b, const Pack<W>& c) {
  each_unit<W>([](auto& x, const auto& y, const auto& z) { x = fused_unit(x, y, z); }, a, b, c);
  return a;
}
template <std::size_t W>
HF_INLINE Pack<W> fused(double a, const Pack<W>& b, const Pack<W>& c) {
  return fused(Pack<W>::all(a), b, c);
}

template <std::size_t V>
struct Width {
  static constexpr std::size_t value = V;
};

// Calls f(at, width) for all points, in packs of `width` doubles that begin at index `at`: one point of W
// lanes, or several points of one lane.
template <std::size_t W, class F>
HF_INLINE void in_packs(std::size_t points, F f) {
  if constexpr (W > 1) {
    for (std::size_t at = 0; at < points * W; at += W) f(at, Width<W>{});
  } else {
    std::size_t at = 0;
    for (; at + widest <= points; at += widest) f(at, Width<widest>{});
    if (at < points) f(at, Width<2>{});
  }
}

}  // namespace HF_KERNEL_BUILD
}  // namespace hearthfront::solver
