// The kernel's exponential against the C library's in long double, for each build of the kernel.
#include <doctest/doctest.h>

#include <algorithm>
#include <array>
#include <cmath>
#include <random>

#include "exp_builds.h"
#include "solver/diffusion/kernel_choice.h"

using namespace hearthfront::solver;
using namespace hearthfront::testing;

namespace {

using Eight = std::array<double, 8>;
using ExpOfBuild = void (*)(std::size_t, const double*, double*);

double largest_relative_error(ExpOfBuild exp_of, double from, double to, std::size_t eights) {
  std::mt19937_64 random(20);
  std::uniform_real_distribution<double> anywhere(from, to);
  double worst = 0;
  for (std::size_t n = 0; n < eights; ++n) {
    Eight x, result;
    for (double& v : x) v = anywhere(random);
    exp_of(8, x.data(), result.data());
    for (std::size_t i = 0; i < 8; ++i) {
      const long double exact = std::exp(static_cast<long double>(x[i]));
      worst = std::max(worst, static_cast<double>(std::fabs((result[i] - exact) / exact)));
    }
  }
  return worst;
}

void check(ExpOfBuild exp_of) {
  SUBCASE("within 5e-16 of the exponential for -700 <= x <= 700") {
    CHECK(largest_relative_error(exp_of, -700, 700, 40000) < 5e-16);
    CHECK(largest_relative_error(exp_of, -40, 2, 40000) < 5e-16);  // where the laws are
    CHECK(largest_relative_error(exp_of, -1e-3, 1e-3, 5000) < 5e-16);
  }
  SUBCASE("exact at 0, finite at the ends of the range") {
    const Eight x{0.0, -0.0, 700.0, -700.0, 0, 0, 0, 0};
    Eight result;
    exp_of(8, x.data(), result.data());
    CHECK(result[0] == 1.0);
    CHECK(result[1] == 1.0);
    CHECK(result[2] == doctest::Approx(1.0142320547350045e304).epsilon(1e-14));
    CHECK(result[3] == doctest::Approx(9.859676543759770e-305).epsilon(1e-14).scale(0));
  }
  SUBCASE("the same bits in packs of every width") {
    std::mt19937_64 random(21);
    std::uniform_real_distribution<double> anywhere(-60, 60);
    for (int n = 0; n < 2000; ++n) {
      Eight x, alone, together;
      for (double& v : x) v = anywhere(random);
      exp_of(1, x.data(), alone.data());
      for (const std::size_t width : {2u, 4u, 8u}) {
        exp_of(width, x.data(), together.data());
        REQUIRE(alone == together);
      }
    }
  }
  SUBCASE("NaN stays NaN") {
    const Eight x{std::nan(""), 1, 1, 1, 1, 1, 1, 1};
    Eight result;
    exp_of(8, x.data(), result.data());
    CHECK(std::isnan(result[0]));
    CHECK(result[1] == doctest::Approx(2.718281828459045).epsilon(1e-15));
  }
}

}  // namespace

TEST_CASE("the exponential of the baseline kernel") {
  check(exp_baseline);
}

TEST_CASE("the exponential of the AVX2 kernel" * doctest::skip(!kernel_available(KernelKind::avx2_fma))) {
  check(exp_avx2_fma);
}
