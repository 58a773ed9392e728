// The mesh: exact volumes and resistances of each shape (geometry), and a quadrature good enough to be the
// carbon inside.
#include "solver/diffusion/mesh.h"

#include <doctest/doctest.h>

#include <cmath>
#include <numeric>
#include <stdexcept>

#include "support/shapes.h"

using namespace hearthfront::solver;
using hearthfront::testing::all_shapes;

namespace {

double area(const Section& s, double x) {
  switch (s.shape) {
    case Shape::plate:
      return 1.0;
    case Shape::cylinder:
      return (s.extent_m - x) / s.extent_m;
    case Shape::sphere:
      return std::pow((s.extent_m - x) / s.extent_m, 2);
    case Shape::bore:
      break;
  }
  return (s.bore_radius_m + x) / s.bore_radius_m;
}

// Volume for each unit of surface, and int dx/A from the surface to x.
double volume(const Section& s) {
  switch (s.shape) {
    case Shape::plate:
      return s.extent_m;
    case Shape::cylinder:
      return s.extent_m / 2;
    case Shape::sphere:
      return s.extent_m / 3;
    case Shape::bore:
      break;
  }
  return s.extent_m + s.extent_m * s.extent_m / (2 * s.bore_radius_m);
}
double resistance(const Section& s, double x) {
  switch (s.shape) {
    case Shape::plate:
      return x;
    case Shape::cylinder:
      return s.extent_m * std::log(s.extent_m / (s.extent_m - x));
    case Shape::sphere:
      return s.extent_m * x / (s.extent_m - x);
    case Shape::bore:
      break;
  }
  return s.bore_radius_m * std::log((s.bore_radius_m + x) / s.bore_radius_m);
}

}  // namespace

TEST_CASE("every shape and size: volume and resistance are the exact totals") {
  for (double extent_m : {0.2e-3, 1.5e-3, 10e-3, 0.5})
    for (const Section& section : all_shapes(extent_m, 7e-3)) {
      CAPTURE(static_cast<int>(section.shape));
      CAPTURE(extent_m);
      const Mesh mesh = make_mesh(section);
      const std::size_t n = mesh.nodes();
      CHECK(n % 2 == 0);
      CHECK(mesh.depth_m.front() == 0.0);
      for (std::size_t i = 1; i < n; ++i) CHECK(mesh.depth_m[i] > mesh.depth_m[i - 1]);
      // Half a spacing is left to the centre.
      CHECK(mesh.depth_m[n - 1] + 0.5 * (mesh.depth_m[n - 1] - mesh.depth_m[n - 2]) ==
            doctest::Approx(extent_m).epsilon(1e-14));
      CHECK(std::accumulate(mesh.volume_m.begin(), mesh.volume_m.end(), 0.0) ==
            doctest::Approx(volume(section)).epsilon(1e-13));
      double through = 0;
      for (std::size_t i = 1; i < n; ++i) through += 1.0 / mesh.conductance_per_m[i];
      CHECK(through == doctest::Approx(resistance(section, mesh.depth_m.back())).epsilon(1e-12));
      CHECK(mesh.conductance_per_m.front() == 0.0);
      CHECK(mesh.conductance_per_m.back() == 0.0);
      for (double v : mesh.volume_m) CHECK(v > 0.0);
    }
}

TEST_CASE("the carbon inside a smooth profile is its integral to 1e-4 of it") {
  const double length_m = 1.0e-3;
  const auto carbon = [&](double x) { return 0.2 + 0.6 * std::exp(-x * x / (length_m * length_m)); };
  for (const Section& section : all_shapes(10e-3, 7e-3)) {
    CAPTURE(static_cast<int>(section.shape));
    const Mesh mesh = make_mesh(section);
    double sum = 0;
    for (std::size_t i = 0; i < mesh.nodes(); ++i) sum += mesh.volume_m[i] * (carbon(mesh.depth_m[i]) - 0.2);
    // Simpson's rule on a fine even grid.
    const int steps = 20000;
    const double h = section.extent_m / steps;
    double exact = 0;
    for (int i = 0; i <= steps; ++i) {
      const double x = std::min(h * i, section.extent_m);
      const double weight = i == 0 || i == steps ? 1 : (i % 2 == 1 ? 4 : 2);
      exact += weight * h / 3 * area(section, x) * (carbon(x) - 0.2);
    }
    CHECK(sum == doctest::Approx(exact).epsilon(1e-4).scale(0));
  }
}

TEST_CASE("sections outside 0.2 mm to 500 mm are refused") {
  CHECK_THROWS_AS(make_mesh({Shape::plate, 0.19e-3, 0}), std::invalid_argument);
  CHECK_THROWS_AS(make_mesh({Shape::cylinder, 0.51, 0}), std::invalid_argument);
  CHECK_THROWS_AS(make_mesh({Shape::sphere, std::nan(""), 0}), std::invalid_argument);
  CHECK_THROWS_AS(make_mesh({Shape::bore, 5e-3, 0}), std::invalid_argument);
  CHECK_NOTHROW(make_mesh({Shape::bore, 5e-3, 0.2e-3}));
}
