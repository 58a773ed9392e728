// W doubles that are computed on together, written out in the machine's own vectors so that nothing hangs on
// what the compiler recognises. Every operation is elementwise IEEE arithmetic: an element's result does not
// depend on W or on its neighbours. Private to the step kernel; arrays of packs wider than 2 start where
// operator new puts them or whole packs later.
#pragma once

#include <array>
#include <cstddef>
#include <cstring>
#include <memory>
#include <type_traits>

namespace hearthfront::solver {

template <std::size_t W>
struct Pack {
  using Vector [[gnu::vector_size(16)]] = double;
  using Unit = std::conditional_t<W == 1, double, Vector>;
  static constexpr std::size_t size = W;
  static constexpr std::size_t parts = W * sizeof(double) / sizeof(Unit);

  std::array<Unit, parts> part;

  static Pack all(double x) {
    Pack p;
    for (Unit& u : p.part) u = Unit{} + x;
    return p;
  }
  static Pack load(const double* from) {
    Pack p;
    if constexpr (W == 1)
      p.part[0] = *from;  // a copy of bytes would go by way of an integer register
    else
      std::memcpy(&p, assumed(from), sizeof p);
    return p;
  }
  void store(double* to) const {
    if constexpr (W == 1)
      *to = part[0];
    else
      std::memcpy(assumed(to), this, sizeof *this);
  }
  // One by one, for what is not in the inner loops.
  template <class F>
  static Pack from(F value_of) {
    std::array<double, W> each;
    for (std::size_t l = 0; l < W; ++l) each[l] = value_of(l);
    Pack p;
    std::memcpy(&p, each.data(), sizeof p);
    return p;
  }

  friend Pack operator+(Pack a, const Pack& b) { return a += b; }
  friend Pack operator-(Pack a, const Pack& b) { return a -= b; }
  friend Pack operator*(Pack a, const Pack& b) { return a *= b; }
  friend Pack operator*(double a, const Pack& b) { return all(a) * b; }
  friend Pack operator/(double a, const Pack& b) {
    Pack p = all(a);
    for (std::size_t i = 0; i < parts; ++i) p.part[i] /= b.part[i];
    return p;
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

 private:
  template <class T>
  static T* assumed(T* p) {
    if constexpr (W <= 2)
      return p;
    else
      return std::assume_aligned<16>(p);
  }
};

}  // namespace hearthfront::solver
