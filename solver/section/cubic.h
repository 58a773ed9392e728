// Cubic through four neighbouring nodes (Lagrange), and where it crosses. Private to section.
#pragma once

#include <algorithm>
#include <cstddef>

namespace hearthfront::solver {

inline double cubic_at(const double* x, const double* y, double at) {
  double sum = 0.0;
  for (int p = 0; p < 4; ++p) {
    double weight = y[p];
    for (int q = 0; q < 4; ++q)
      if (q != p) weight *= (at - x[q]) / (x[p] - x[q]);
    sum += weight;
  }
  return sum;
}

// First of the four nodes around the interval that ends at node `i`.
inline std::size_t cubic_first(std::size_t i, std::size_t nodes) {
  return std::min(i >= 2 ? i - 2 : 0, nodes - 4);
}

// Where the cubic through four nodes leaves `before`, by halving [low, high]. The cubic passes through both
// ends, so the bracket holds such a place.
template <class Predicate>
double root_between(const double* x, const double* y, double low, double high, Predicate before) {
  for (int step = 0; step < 60 && high - low > 1e-13; ++step) {
    const double middle = 0.5 * (low + high);
    (before(cubic_at(x, y, middle)) ? low : high) = middle;
  }
  return 0.5 * (low + high);
}

}  // namespace hearthfront::solver
