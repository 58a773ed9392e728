#include "bench/kernel_floor.h"

#include <algorithm>
#include <cmath>
#include <vector>

#include "support/cpu_time.h"

namespace hearthfront::testing {
namespace {

constexpr std::size_t lanes = 8;

struct Arrays {
  explicit Arrays(std::size_t n)
      : lower(n * lanes, -1.0),
        upper(n * lanes, -1.0),
        diagonal(n * lanes),
        right(n * lanes),
        argument(n * lanes) {}
  std::vector<double> lower, upper, diagonal, right, argument;
};

void exponentials(std::size_t values, const double* __restrict from, double* __restrict to, double offset) {
  for (std::size_t i = 0; i < values; ++i) to[i] = offset + std::exp(from[i]);
}

void factor(std::size_t n, Arrays& a) {
  double* __restrict diagonal = a.diagonal.data();
  double* __restrict lower = a.lower.data();
  const double* __restrict upper = a.upper.data();
  for (std::size_t l = 0; l < lanes; ++l) diagonal[l] = 1.0 / diagonal[l];
  for (std::size_t i = lanes; i < n * lanes; i += lanes)
    for (std::size_t l = 0; l < lanes; ++l) {
      lower[i + l] = -diagonal[i + l - lanes];
      diagonal[i + l] = 1.0 / (diagonal[i + l] - lower[i + l] * upper[i + l - lanes]);
    }
}

void solve(std::size_t n, Arrays& a) {
  double* __restrict x = a.right.data();
  const double* __restrict diagonal = a.diagonal.data();
  const double* __restrict lower = a.lower.data();
  const double* __restrict upper = a.upper.data();
  for (std::size_t i = lanes; i < n * lanes; i += lanes)
    for (std::size_t l = 0; l < lanes; ++l) x[i + l] -= lower[i + l] * x[i + l - lanes];
  for (std::size_t i = (n - 1) * lanes; i-- > 0;) x[i] = (x[i] - upper[i] * x[i + lanes]) * diagonal[i];
}

}  // namespace

double floor_seconds_per_node_step(std::size_t nodes) {
  Arrays a(nodes);
  for (std::size_t i = 0; i < nodes * lanes; ++i) a.argument[i] = -1.0 + 1e-3 * static_cast<double>(i);
  constexpr int steps = 500;
  double best = 1e9;
  double keep = 0;
  for (int repeat = 0; repeat < 30; ++repeat) {
    const double begin = thread_seconds();
    for (int step = 0; step < steps; ++step) {
      exponentials(nodes * lanes, a.argument.data(), a.diagonal.data(), 3.0);
      exponentials(nodes * lanes, a.argument.data(), a.right.data(), 0.0);
      factor(nodes, a);
      solve(nodes, a);
      solve(nodes, a);
      keep += a.right[0];
    }
    best = std::min(best, thread_seconds() - begin);
  }
  // The sum keeps the work from being optimised away; it is always positive.
  return keep > 0 ? best / (steps * static_cast<double>(nodes * lanes)) : 0.0;
}

}  // namespace hearthfront::testing
