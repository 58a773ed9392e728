// exp(x) of a pack as plain arithmetic: a value is the same bits whether it was computed alone or beside
// others. Relative error below 5e-16 for -700 <= x <= 700 in every build of the kernel (tests/solver);
// outside that range the result is meaningless, callers stay inside by the validity ranges of the laws.
#pragma once

#include "solver/diffusion/pack.h"

namespace hearthfront::solver {
inline namespace HF_KERNEL_BUILD {

template <std::size_t W>
HF_INLINE Pack<W> fast_exp(const Pack<W>& x) {
  using P = Pack<W>;
  // x = n ln2 + r with |r| <= ln2/2; exp(r) by its Taylor polynomial of degree 12, remainder 1.7e-16.
  constexpr double log2_e = 1.4426950408889634;
  constexpr double ln2_high = 6.93147180369123816490e-01;  // its last bits are 0: n ln2_high is exact
  constexpr double ln2_low = 1.90821492927058770002e-10;
  constexpr double shift = 6755399441055744.0;  // 1.5 * 2^52: adding it rounds to an integer
  constexpr double inverse_factorial[] = {
      1.0 / 39916800.0, 1.0 / 3628800.0, 1.0 / 362880.0, 1.0 / 40320.0, 1.0 / 5040.0, 1.0 / 720.0,
      1.0 / 120.0,      1.0 / 24.0,      1.0 / 6.0,      0.5,           1.0,          1.0};
  const P shifted = fused(log2_e, x, P::all(shift));
  const P n = shifted - P::all(shift);
  const P r = fused(-ln2_low, n, fused(-ln2_high, n, x));
  P p = P::all(1.0 / 479001600.0);
  for (const double term : inverse_factorial) p = fused(p, r, P::all(term));
  using Unit = UnitOf<(W < widest ? W : widest)>;
  each_unit<W>(
      [](auto& unit, const auto& rounded) {
        const auto power = (__builtin_bit_cast(typename Unit::Bits, rounded) + 1023u) << 52u;
        unit *= __builtin_bit_cast(typename Unit::Double, power);
      },
      p, shifted);
  return p;
}

}  // namespace HF_KERNEL_BUILD
}  // namespace hearthfront::solver
