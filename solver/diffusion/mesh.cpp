#include "solver/diffusion/mesh.h"

#include <algorithm>
#include <array>
#include <cmath>
#include <stdexcept>

namespace hearthfront::solver {
namespace {

// Relative area at depth x.
double area_at(const Section& s, double x) {
  switch (s.shape) {
    case Shape::plate:
      return 1.0;
    case Shape::cylinder:
      return 1.0 - x / s.extent_m;
    case Shape::sphere:
      return (1.0 - x / s.extent_m) * (1.0 - x / s.extent_m);
    case Shape::bore:
      return 1.0 + x / s.bore_radius_m;
  }
  return 1.0;
}

// int dx/A between two depths, exact for every shape and without cancellation in thin intervals.
double resistance_between(const Section& s, double x0, double x1) {
  const double width = x1 - x0;
  switch (s.shape) {
    case Shape::plate:
      return width;
    case Shape::cylinder:
      return s.extent_m * std::log1p(width / (s.extent_m - x1));
    case Shape::sphere:
      return width / ((1.0 - x0 / s.extent_m) * (1.0 - x1 / s.extent_m));
    case Shape::bore:
      return s.bore_radius_m * std::log1p(width / (s.bore_radius_m + x0));
  }
  return width;
}

std::vector<double> graded_nodes(double extent, const MeshDensity& density) {
  const double bulk =
      std::max(density.surface_spacing_m, density.diffusion_length_m / density.nodes_per_length);
  const double fine_to = density.fine_lengths * density.diffusion_length_m;
  std::vector<double> node{0.0};
  double width = density.surface_spacing_m;
  // Stop where the centre is reached within half a spacing of the last node; an even number, see Mesh.
  while (node.back() + 0.5 * width < extent || node.size() < 8 || node.size() % 2 != 0) {
    node.push_back(node.back() + width);
    const bool fine = node.back() < fine_to;
    width = fine ? std::min(width * density.growth, bulk) : width * density.core_growth;
  }
  // Stretch or shrink the whole mesh so that the last node is half its spacing before the centre: ratios of
  // neighbours stay as they are.
  const std::size_t n = node.size();
  const double scale = extent / (node[n - 1] + 0.5 * (node[n - 1] - node[n - 2]));
  for (double& x : node) x *= scale;
  return node;
}

// int f(x) dx over [a, b] by Gauss' rule of six points: exact for polynomials, and to round-off for the
// logarithms of the round shapes on intervals this short.
template <class F>
double integral(double a, double b, F f) {
  constexpr std::array<double, 3> point{0.2386191860831969, 0.6612093864662645, 0.9324695142031521};
  constexpr std::array<double, 3> weight{0.4679139345726910, 0.3607615730481386, 0.1713244923791704};
  const double middle = 0.5 * (a + b), half = 0.5 * (b - a);
  double sum = 0.0;
  for (std::size_t i = 0; i < 3; ++i)
    sum += weight[i] * (f(middle - half * point[i]) + f(middle + half * point[i]));
  return half * sum;
}

void fill_masses(Mesh& mesh) {
  const Section& s = mesh.section;
  const auto& x = mesh.depth_m;
  const std::size_t n = x.size();
  const auto add_row = [&](std::size_t i, double a, double b, auto test) {
    const auto with = [&](auto shape) {
      return integral(a, b, [&](double at) { return area_at(s, at) * test(at) * shape(at); });
    };
    if (i == 0) {
      // Straight between the first two nodes, to keep the row tridiagonal: the spacing is smallest here.
      mesh.mass_diagonal_m[0] += with([&](double at) { return (x[1] - at) / (x[1] - x[0]); });
      mesh.mass_upper_m[0] += with([&](double at) { return (at - x[0]) / (x[1] - x[0]); });
    } else if (i + 1 == n) {
      // Symmetric about the centre: a parabola in the distance from it.
      const auto square = [&](double at) { return (s.extent_m - at) * (s.extent_m - at); };
      const double outer = square(x[i - 1]), inner = square(x[i]);
      mesh.mass_lower_m[i] += with([&](double at) { return (square(at) - inner) / (outer - inner); });
      mesh.mass_diagonal_m[i] += with([&](double at) { return (outer - square(at)) / (outer - inner); });
    } else {
      const double p = x[i - 1], q = x[i], r = x[i + 1];
      mesh.mass_lower_m[i] += with([&](double at) { return (at - q) * (at - r) / ((p - q) * (p - r)); });
      mesh.mass_diagonal_m[i] += with([&](double at) { return (at - p) * (at - r) / ((q - p) * (q - r)); });
      mesh.mass_upper_m[i] += with([&](double at) { return (at - p) * (at - q) / ((r - p) * (r - q)); });
    }
  };
  for (std::size_t i = 0; i < n; ++i) {
    if (i > 0)
      add_row(i, x[i - 1], x[i],
              [&](double at) { return resistance_between(s, x[i - 1], at) * mesh.conductance_per_m[i]; });
    if (i + 1 < n)
      add_row(i, x[i], x[i + 1],
              [&](double at) { return resistance_between(s, at, x[i + 1]) * mesh.conductance_per_m[i + 1]; });
    else
      add_row(i, x[i], s.extent_m, [](double) { return 1.0; });
  }
  for (std::size_t j = 0; j < n; ++j) {
    mesh.volume_m[j] = mesh.mass_diagonal_m[j];
    if (j > 0) mesh.volume_m[j] += mesh.mass_upper_m[j - 1];
    if (j + 1 < n) mesh.volume_m[j] += mesh.mass_lower_m[j + 1];
  }
}

}  // namespace

Mesh make_mesh(const Section& section, const MeshDensity& density) {
  const bool extent_ok = section.extent_m >= 0.2e-3 && section.extent_m <= 0.5;
  const bool bore_ok =
      section.shape != Shape::bore || (section.bore_radius_m >= 0.2e-3 && section.bore_radius_m <= 0.5);
  if (!extent_ok || !bore_ok) throw std::invalid_argument("section outside 0.2 mm to 500 mm");

  Mesh mesh;
  mesh.section = section;
  mesh.depth_m = graded_nodes(section.extent_m, density);
  const std::size_t n = mesh.nodes();
  mesh.conductance_per_m.assign(n + 1, 0.0);
  for (std::size_t i = 1; i < n; ++i)
    mesh.conductance_per_m[i] = 1.0 / resistance_between(section, mesh.depth_m[i - 1], mesh.depth_m[i]);
  for (auto* row : {&mesh.mass_lower_m, &mesh.mass_diagonal_m, &mesh.mass_upper_m, &mesh.volume_m})
    row->assign(n, 0.0);
  fill_masses(mesh);
  return mesh;
}

}  // namespace hearthfront::solver
