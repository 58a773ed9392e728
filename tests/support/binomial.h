// Exact binomial tails, for intervals of coverage: a share p is kept where neither tail of the observed count
// is rarer than half of 1 - confidence (C. J. Clopper, E. S. Pearson, Biometrika 26 (1934) 404).
#pragma once

#include <cmath>
#include <cstddef>

namespace hearthfront::testing {

// Chance of `hits` or fewer out of n.
inline double binomial_up_to(std::size_t hits, std::size_t n, double p) {
  if (p <= 0) return 1;
  if (p >= 1) return hits >= n ? 1 : 0;
  const double size = static_cast<double>(n);
  double sum = 0;
  for (std::size_t k = 0; k <= hits && k <= n; ++k) {
    const double each = static_cast<double>(k);
    sum += std::exp(std::lgamma(size + 1) - std::lgamma(each + 1) - std::lgamma(size - each + 1) +
                    each * std::log(p) + (size - each) * std::log1p(-p));
  }
  return sum < 1 ? sum : 1;
}

inline bool binomial_agrees(std::size_t hits, std::size_t n, double p, double confidence) {
  const double tail = 0.5 * (1 - confidence);
  const double above = hits == 0 ? 1.0 : 1 - binomial_up_to(hits - 1, n, p);
  return binomial_up_to(hits, n, p) > tail && above > tail;
}

}  // namespace hearthfront::testing
