// Exact solutions in a half-space (a plate much thicker than the diffusion length), constant D = 2e-11 m2/s.
// Source: J. Crank, The Mathematics of Diffusion, 2nd ed. 1975, chapters 2 and 3; figures to four places were
// computed from them outside this project. Stated accuracy: 1e-4 of the driving difference from 30 min on.
#include <doctest/doctest.h>

#include <algorithm>
#include <initializer_list>

#include "solver/material/constants.h"
#include "validation/exact_support.h"

using namespace hearthfront::solver;
using namespace hearthfront::testing;

namespace {

constexpr double stated = 1e-4;
constexpr double settled_s = 1800;
constexpr double four_hours = 14400, eight_hours = 28800;
constexpr Section plate{Shape::plate, 10e-3, 0};

double length_of(double t_s) {
  return 2 * std::sqrt(d_constant * t_s);
}

Profile profile_of(const CarbonField& field, const LaneConditions& conditions) {
  return read_profile(field, 0, conditions);
}

}  // namespace

TEST_CASE("fixed surface: C0 + (Cs - C0) erfc(x / 2 sqrt(Dt))") {
  for (double total_s : {four_hours, eight_hours}) {
    double worst = 0;
    // An unlimited transfer coefficient holds the surface at the gas.
    carburize(constant_part(plate, 1e3), length_of(total_s), 1.0, total_s,
              [&](double t, const Mesh& mesh, const CarbonField& field, const LaneConditions& conditions) {
                if (t < settled_s) return;
                for (std::size_t i = 0; i < mesh.nodes(); ++i) {
                  const double exact = std::erfc(mesh.depth_m[i] / length_of(t));
                  worst = std::max(worst, std::fabs((field.carbon_wt_pct(0, i) - 0.2) / 0.8 - exact));
                }
                if (t != four_hours) return;
                // x(0.40) = 0.8731 mm; uptake 2 (Cs - C0) sqrt(Dt/pi) = 0.4844 wt% mm = 36.82 g/m2.
                CHECK(1e3 * depth_at_carbon_m(profile_of(field, conditions), 0.40).value() ==
                      doctest::Approx(0.8731).epsilon(2e-4));
                CHECK(1e3 * field.crossed_wt_pct_m[0] == doctest::Approx(0.4844).epsilon(5e-4));
                CHECK(carbon_uptake_g_m2(field, 0) == doctest::Approx(36.82).epsilon(5e-4));
              });
    CAPTURE(total_s);
    CHECK(worst < stated);
  }
}

TEST_CASE("convective surface: erfc(z) - exp(-z^2) erfcx(z + h sqrt(Dt)), h = beta/D = 6500 /m") {
  constexpr double h = 6500;
  const auto fraction = [](double x, double t) {
    const double z = x / length_of(t);
    return std::erfc(z) - std::exp(-z * z) * erfcx(z + h * std::sqrt(d_constant * t));
  };
  // The formula as coded here, against figures: profile at 4 h and surface at several times.
  const double x_mm[] = {0, 0.2, 0.5, 1.0, 1.5}, c_4h[] = {0.8754, 0.7191, 0.5188, 0.3083, 0.2256};
  for (std::size_t i = 0; i < 5; ++i)
    CHECK(std::fabs(0.2 + 0.8 * fraction(1e-3 * x_mm[i], four_hours) - c_4h[i]) < 6e-5);

  for (double total_s : {four_hours, eight_hours}) {
    double worst = 0;
    carburize(constant_part(plate, h * d_constant), length_of(total_s), 1.0, total_s,
              [&](double t, const Mesh& mesh, const CarbonField& field, const LaneConditions&) {
                if (t < settled_s) return;
                for (std::size_t i = 0; i < mesh.nodes(); ++i)
                  worst = std::max(worst, std::fabs((field.carbon_wt_pct(0, i) - 0.2) / 0.8 -
                                                    fraction(mesh.depth_m[i], t)));
                const double times_s[] = {1800, 3600, 7200, 14400, 28800};
                const double surface[] = {0.7029, 0.7714, 0.8293, 0.8754, 0.9103};
                for (std::size_t i = 0; i < 5; ++i)
                  if (t == times_s[i]) CHECK(std::fabs(field.carbon_wt_pct(0, 0) - surface[i]) < 1.3e-4);
                // Uptake (Cp - C0)/h [erfcx(h sqrt(Dt)) - 1 + 2 h sqrt(Dt/pi)] = 0.3805 wt% mm.
                if (t == four_hours)
                  CHECK(1e3 * field.crossed_wt_pct_m[0] == doctest::Approx(0.3805).epsilon(4e-4));
              });
    CAPTURE(total_s);
    CHECK(worst < stated);
  }
}

TEST_CASE("constant flux: C0 + 2 j sqrt(t/D) ierfc(z), to 1e-4 of the surface rise") {
  const auto rise = [](double j, double x, double t) {
    const double z = x / length_of(t);
    return 2 * j * std::sqrt(t / d_constant) * (std::exp(-z * z) / std::sqrt(M_PI) - z * std::erfc(z));
  };
  constexpr double j = 1e-8;
  CarbonField field(std::make_shared<const Mesh>(make_mesh(plate, density_for(length_of(eight_hours)))), 1,
                    0.2);
  const LaneConditions conditions = constant_conditions(0, INFINITY, j);
  double worst = 0;
  diffuse(field, conditions, eight_hours, [&](double t) {
    if (t < settled_s) return;
    for (std::size_t i = 0; i < field.mesh->nodes(); ++i)
      worst =
          std::max(worst, std::fabs(field.carbon_wt_pct(0, i) - 0.2 - rise(j, field.mesh->depth_m[i], t)) /
                              rise(j, 0, t));
  });
  CHECK(worst < stated);
  CHECK(field.crossed_wt_pct_m[0] == doctest::Approx(j * eight_hours).epsilon(1e-12));
}

TEST_CASE("constant flux of low-pressure boost: 100 g/(m2 h) for two minutes, in steps of half a second") {
  const double j = 100.0 / 3600 * 100 / (1000 * austenite_density_kg_m3);  // 3.655e-7 wt% m/s
  CHECK(j == doctest::Approx(3.655e-7).epsilon(1e-4));
  CarbonField field(std::make_shared<const Mesh>(make_mesh(plate, density_for(length_of(120)))), 1, 0.2);
  DiffusionStepper stepper(field.mesh->nodes(), 1);
  const LaneConditions conditions = constant_conditions(0, INFINITY, j);
  const int seconds[] = {30, 60, 120};
  const double surface[] = {0.7051, 0.9143, 1.2102}, at_50_um[] = {0.2422, 0.3434, 0.5487};
  int done = 0;
  for (std::size_t i = 0; i < 3; ++i) {
    for (; done < 2 * seconds[i]; ++done) stepper.step(field, {&conditions, 1}, 0.5);
    CHECK(std::fabs(field.carbon_wt_pct(0, 0) - surface[i]) < 3e-4);
    const double depth = depth_at_carbon_m(profile_of(field, conditions), at_50_um[i]).value();
    CHECK(std::fabs(depth - 50e-6) < 0.1e-6);
  }
}

TEST_CASE("thin film on an impermeable surface: M / sqrt(pi D t) exp(-x^2 / 4Dt)") {
  constexpr double mass = 0.3e-3, film_s = 600;  // wt% m; age of the film at the start
  const auto rise = [](double x, double t) {
    return mass / std::sqrt(M_PI * d_constant * t) * std::exp(-x * x / (4 * d_constant * t));
  };
  CarbonField field(std::make_shared<const Mesh>(make_mesh(plate, density_for(length_of(four_hours)))), 1,
                    0.2);
  for (std::size_t i = 0; i < field.mesh->nodes(); ++i)
    field.set_carbon_wt_pct(0, i, 0.2 + rise(field.mesh->depth_m[i], film_s));
  const double inventory = field.inventory_wt_pct_m(0);
  CHECK(inventory - 0.2 * 10e-3 == doctest::Approx(mass).epsilon(2e-4));
  const LaneConditions sealed = constant_conditions(0, INFINITY, 0);
  double worst = 0;
  diffuse(field, sealed, four_hours - film_s, [&](double since) {
    const double t = film_s + since;
    CHECK(std::fabs(field.inventory_wt_pct_m(0) / inventory - 1) < 1e-13);  // mass is kept
    if (t < settled_s) return;
    for (std::size_t i = 0; i < field.mesh->nodes(); ++i)
      worst = std::max(
          worst, std::fabs(field.carbon_wt_pct(0, i) - 0.2 - rise(field.mesh->depth_m[i], t)) / rise(0, t));
    // The sign of change follows the sign of curvature: it turns at the inflection, sqrt(2Dt).
    CHECK(turnover_depth_m(field, 0, sealed).value() ==
          doctest::Approx(std::sqrt(2 * d_constant * t)).epsilon(1e-3));
  });
  CHECK(worst < stated);
  CHECK(field.crossed_wt_pct_m[0] == 0.0);
  CHECK(1e3 * turnover_depth_m(field, 0, sealed).value() == doctest::Approx(0.7589).epsilon(1e-3));
  CHECK(std::fabs(field.carbon_wt_pct(0, 0) - 0.5154) < 1e-4);
}

TEST_CASE("thin film between two half-spaces: spreads both ways alike, changes as it curves") {
  // Even spacing, that of the shipped bulk; film in the middle of 20 mm.
  constexpr double middle = 5e-3, mass = 0.6e-3, film_s = 3600;
  MeshDensity even;
  even.surface_spacing_m = length_of(four_hours) / even.nodes_per_length;
  even.diffusion_length_m = 10e-3;
  even.nodes_per_length = 10e-3 / even.surface_spacing_m;
  even.growth = even.core_growth = 1;
  CarbonField field(std::make_shared<const Mesh>(make_mesh(plate, even)), 1, 0.2);
  const auto rise = [](double x, double t) {
    const double from = x - middle;
    return mass / std::sqrt(4 * M_PI * d_constant * t) * std::exp(-from * from / (4 * d_constant * t));
  };
  const auto& x = field.mesh->depth_m;
  for (std::size_t i = 0; i < x.size(); ++i) field.set_carbon_wt_pct(0, i, 0.2 + rise(x[i], film_s));
  const double inventory = field.inventory_wt_pct_m(0);
  double worst = 0;
  std::vector<double> before = field.values;
  diffuse(field, constant_conditions(0, INFINITY, 0), four_hours - film_s, [&](double since) {
    const double t = film_s + since;
    const double inflection = std::sqrt(2 * d_constant * (t - 30));
    for (std::size_t i = 1; i + 1 < x.size(); ++i) {
      worst = std::max(worst, std::fabs(field.carbon_wt_pct(0, i) - 0.2 - rise(x[i], t)) / rise(middle, t));
      const double from = std::fabs(x[i] - middle);
      if (from > 4 * inflection || std::fabs(from - inflection) < even.surface_spacing_m) continue;
      const double curvature = before[i - 1] - 2 * before[i] + before[i + 1];
      const double change = field.values[i] - before[i];
      CHECK((curvature > 0) == (from > inflection));
      CHECK((change > 0) == (curvature > 0));
    }
    before = field.values;
  });
  CHECK(worst < stated);
  CHECK(std::fabs(field.inventory_wt_pct_m(0) / inventory - 1) < 1e-13);
}
