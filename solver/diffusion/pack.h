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
#define HF_KERNEL_BUILD avx2_fma
#else
#define HF_KERNEL_BUILD baseline
#endif

namespace hearthfront::solver {
inline namespace HF_KERNEL_BUILD {

// What a pack is made of: the widest of these that it fills.
struct Scalar {
  using Double = double;
  using Bits = std::uint64_t;
};
struct TwoWide {
  using Double [[gnu::vector_size(16)]] = double;
  using Bits [[gnu::vector_size(16)]] = std::uint64_t;
};
template <std::size_t W>
struct UnitOf : TwoWide {};
template <>
struct UnitOf<1> : Scalar {};

// a b + c: one rounding where the build has the instruction, two where it has not.
#if defined(HF_KERNEL_AVX2)
struct FourWide {
  using Double [[gnu::vector_size(32)]] = double;
  using Bits [[gnu::vector_size(32)]] = std::uint64_t;
};
template <>
struct UnitOf<4> : FourWide {};
template <>
struct UnitOf<8> : FourWide {};
inline constexpr std::size_t widest = 4;

inline double fused_unit(double a, double b, double c) {
  return __builtin_fma(a, b, c);
}
inline TwoWide::Double fused_unit(TwoWide::Double a, TwoWide::Double b, TwoWide::Double c) {
  return _mm_fmadd_pd(a, b, c);
}
inline FourWide::Double fused_unit(FourWide::Double a, FourWide::Double b, FourWide::Double c) {
  return _mm256_fmadd_pd(a, b, c);
}
#else
inline constexpr std::size_t widest = 2;

template <class Unit>
Unit fused_unit(Unit a, Unit b, Unit c) {
  return a * b + c;
}
#endif

template <std::size_t W>
struct Pack {
  using Unit = typename UnitOf<W>::Double;
  using Bits = typename UnitOf<W>::Bits;
  static constexpr std::size_t size = W;
  static constexpr std::size_t parts = W * sizeof(double) / sizeof(Unit);

  Unit part[parts];

  static Pack all(double x) {
    Pack p;
    for (Unit& u : p.part) u = Unit{} + x;
    return p;
  }
  // No alignment asked for.
  static Pack load(const double* from) {
    Pack p;
    for (std::size_t i = 0; i < parts; ++i)
      __builtin_memcpy(&p.part[i], from + i * (W / parts), sizeof(Unit));
    return p;
  }
  void store(double* to) const {
    for (std::size_t i = 0; i < parts; ++i) __builtin_memcpy(to + i * (W / parts), &part[i], sizeof(Unit));
  }
  // One by one, for what is not in the inner loops.
  template <class F>
  static Pack from(F value_of) {
    double each[W];
    for (std::size_t l = 0; l < W; ++l) each[l] = value_of(l);
    return load(each);
  }

  friend Pack operator+(Pack a, const Pack& b) { return a += b; }
  friend Pack operator-(Pack a, const Pack& b) { return a -= b; }
  friend Pack operator*(Pack a, const Pack& b) { return a *= b; }
  friend Pack operator*(double a, const Pack& b) { return all(a) * b; }
  friend Pack operator/(double a, const Pack& b) { return all(a) /= b; }
  friend Pack operator/(Pack a, const Pack& b) { return a /= b; }
  friend Pack operator-(Pack a) {
    for (Unit& u : a.part) u = -u;
    return a;
  }
  Pack& operator+=(const Pack& b) {
    for (std::size_t i = 0; i < parts; ++i) part[i] += b.part[i];
    return *this;
  }
  Pack& operator-=(const Pack& b) {
    for (std::size_t i = 0; i < parts; ++i) part[i] -= b.part[i];
    return *this;
  }
  Pack& operator*=(const Pack& b) {
    for (std::size_t i = 0; i < parts; ++i) part[i] *= b.part[i];
    return *this;
  }
  Pack& operator/=(const Pack& b) {
    for (std::size_t i = 0; i < parts; ++i) part[i] /= b.part[i];
    return *this;
  }
};

template <std::size_t W>
Pack<W> fused(const Pack<W>& a, const Pack<W>& b, const Pack<W>& c) {
  Pack<W> p;
  for (std::size_t i = 0; i < Pack<W>::parts; ++i) p.part[i] = fused_unit(a.part[i], b.part[i], c.part[i]);
  return p;
}
template <std::size_t W>
Pack<W> fused(double a, const Pack<W>& b, const Pack<W>& c) {
  return fused(Pack<W>::all(a), b, c);
}

}  // namespace HF_KERNEL_BUILD
}  // namespace hearthfront::solver
