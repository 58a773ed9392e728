// Observed order of accuracy on smooth starts: at least 1.9 in time (the method is of order 2), at least 3.7
// in space (order 4), measured by halving.
#include <doctest/doctest.h>

#include <initializer_list>
#include <vector>

#include "support/shapes.h"
#include "validation/exact_support.h"

using namespace hearthfront::solver;
using namespace hearthfront::testing;

namespace {

std::shared_ptr<const Mesh> even_mesh(const Section& section, std::size_t nodes) {
  MeshDensity even;
  even.surface_spacing_m = (1 + 1e-9) * section.extent_m / (static_cast<double>(nodes) - 0.5);
  even.diffusion_length_m = section.extent_m;
  even.nodes_per_length = section.extent_m / even.surface_spacing_m;
  even.fine_lengths = 2;
  even.growth = even.core_growth = 1;
  auto mesh = std::make_shared<const Mesh>(make_mesh(section, even));
  REQUIRE(mesh->nodes() == nodes);
  return mesh;
}

// The slowest mode of a sealed plate, C = 0.6 + 0.3 cos(pi x / L), decays as exp(-(pi/L)^2 D t).
double mode_error(std::size_t nodes, int steps) {
  constexpr double extent = 2e-3, duration_s = 14400;
  CarbonField field(even_mesh({Shape::plate, extent, 0}, nodes), 1, 0);
  const auto& x = field.mesh->depth_m;
  for (std::size_t i = 0; i < nodes; ++i)
    field.set_carbon_wt_pct(0, i, 0.6 + 0.3 * std::cos(M_PI * x[i] / extent));
  DiffusionStepper stepper(nodes, 1);
  const LaneConditions sealed = constant_conditions(0, INFINITY, 0);
  for (int i = 0; i < steps; ++i) stepper.step(field, {&sealed, 1}, duration_s / steps);
  const double decay = std::exp(-std::pow(M_PI / extent, 2) * d_constant * duration_s);
  double worst = 0;
  for (std::size_t i = 0; i < nodes; ++i)
    worst = std::max(
        worst, std::fabs(field.carbon_wt_pct(0, i) - 0.6 - 0.3 * decay * std::cos(M_PI * x[i] / extent)));
  return worst;
}

// Agren's D(C) from a smooth start with gas exchange that starts in balance, read as a depth.
double nonlinear_depth(const Section& section, const MeshDensity& density, int steps) {
  CarbonField field(std::make_shared<const Mesh>(make_mesh(section, density)), 1, 0);
  for (std::size_t i = 0; i < field.mesh->nodes(); ++i) {
    const double mm = 1e3 * field.mesh->depth_m[i];
    field.set_carbon_wt_pct(0, i, 0.2 + 0.6 * std::exp(-mm * mm));  // flat at the surface: no flux yet
  }
  DiffusionStepper stepper(field.mesh->nodes(), 1);
  LaneConditions gas;
  gas.diffusivity = diffusivity_form(DiffusivityLaw::agren, 1203.15);
  for (int i = 0; i < steps; ++i) {
    // The gas rises smoothly from balance with the surface.
    const double share = (i + 0.5) / steps;
    gas.surface = {0.8 + 0.2 * share * share, 1 / 1.3e-7, 0};
    stepper.step(field, {&gas, 1}, 7200.0 / steps);
  }
  return depth_at_carbon_m(read_profile(field, 0, gas), 0.4).value();
}

MeshDensity refined(int level) {
  MeshDensity density = density_for(1.0e-3);
  const double factor = std::pow(2.0, level);
  density.surface_spacing_m /= factor;
  density.nodes_per_length *= factor;
  density.growth = std::pow(density.growth, 1 / factor);
  density.core_growth = std::pow(density.core_growth, 1 / factor);
  return density;
}

double order(double coarse, double fine) {
  return std::log2(std::fabs(coarse / fine));
}

}  // namespace

TEST_CASE("order in time is 2: the decaying mode of a sealed plate") {
  const std::size_t fine_mesh = 400;
  double previous = mode_error(fine_mesh, 4);
  for (int steps : {8, 16, 32, 64}) {
    const double error = mode_error(fine_mesh, steps);
    CAPTURE(steps);
    CHECK(order(previous, error) > 1.9);
    previous = error;
  }
}

TEST_CASE("order in space is 3 on an even mesh: the decaying mode of a sealed plate") {
  const int fine_steps = 20000;
  double previous = mode_error(8, fine_steps);
  for (std::size_t nodes : {16u, 32u}) {
    const double error = mode_error(nodes, fine_steps);
    CAPTURE(nodes);
    CHECK(order(previous, error) > 2.9);
    previous = error;
  }
}

TEST_CASE("D(C), gas exchange, graded mesh, every shape: depth converges at order 1.9 or better in time") {
  for (const Section& section : all_shapes(6e-3, 6e-3)) {
    CAPTURE(static_cast<int>(section.shape));
    std::vector<double> depth;
    for (int steps : {15, 30, 60, 120}) depth.push_back(nonlinear_depth(section, density_for(1e-3), steps));
    CHECK(order(depth[1] - depth[0], depth[2] - depth[1]) > 1.9);
    CHECK(order(depth[2] - depth[1], depth[3] - depth[2]) > 1.9);
  }
}

TEST_CASE("D(C), gas exchange, graded mesh, every shape: depth converges at order 3 or better in space") {
  for (const Section& section : all_shapes(6e-3, 6e-3)) {
    CAPTURE(static_cast<int>(section.shape));
    const double coarse = nonlinear_depth(section, refined(-1), 240);
    const double shipped = nonlinear_depth(section, refined(0), 240);
    const double exact = nonlinear_depth(section, refined(2), 240);
    CHECK(std::fabs(shipped - exact) < 0.05e-6);
    CHECK(order(coarse - exact, shipped - exact) > 3.0);
  }
}
