// Random numbers that are the same on every standard library: the engine's bits are fixed by the standard,
// the distributions are made here.
#pragma once

#include <cmath>
#include <cstdint>
#include <numbers>
#include <random>

namespace hearthfront::testing {

class Random {
 public:
  // Neighbouring seeds are scattered first (finalizer of G. L. Steele et al., OOPSLA 2014): the engine's own
  // start leaves them alike.
  explicit Random(std::uint64_t seed) : engine_(scattered(seed)) {}
  // In (0, 1).
  double uniform() { return (static_cast<double>(engine_() >> 12) + 0.5) * 0x1p-52; }
  double between(double low, double high) { return low + (high - low) * uniform(); }
  // Box and Muller.
  double normal() {
    const double radius = std::sqrt(-2 * std::log(uniform()));
    return radius * std::cos(2 * std::numbers::pi * uniform());
  }
  bool happens(double chance) { return uniform() < chance; }
  std::size_t below(std::size_t n) { return static_cast<std::size_t>(uniform() * static_cast<double>(n)); }

 private:
  static std::uint64_t scattered(std::uint64_t z) {
    z = (z ^ (z >> 30)) * 0xbf58476d1ce4e5b9ULL;
    z = (z ^ (z >> 27)) * 0x94d049bb133111ebULL;
    return z ^ (z >> 31);
  }

  std::mt19937_64 engine_;
};

}  // namespace hearthfront::testing
