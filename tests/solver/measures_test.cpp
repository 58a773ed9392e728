// What is read off a profile, on profiles that are known in closed form.
#include "solver/section/measures.h"

#include <doctest/doctest.h>

#include <cmath>

#include "solver/material/constants.h"

using namespace hearthfront::solver;

namespace {

template <class F>
Profile sampled(F carbon) {
  Profile profile;
  profile.depth_m = make_mesh({Shape::plate, 10e-3, 0}).depth_m;
  for (double x : profile.depth_m) profile.carbon_wt_pct.push_back(carbon(x));
  return profile;
}

}  // namespace

TEST_CASE("depth at a carbon content: a straight profile is read exactly") {
  const Profile profile = sampled([](double x) { return 0.9 - 400.0 * x; });
  CHECK(depth_at_carbon_m(profile, 0.35).value() == doctest::Approx(0.55 / 400).epsilon(1e-9));
}

TEST_CASE("depth at a carbon content: a smooth profile is read to 0.05 um from the shipped nodes") {
  // Bell curve of Crank's thin film: C = 0.2 + 0.8 exp(-(x/1 mm)^2).
  const Profile profile = sampled([](double x) { return 0.2 + 0.8 * std::exp(-x * x * 1e6); });
  for (double limit : {0.3, 0.35, 0.4, 0.5, 0.8}) {
    const double exact = 1e-3 * std::sqrt(-std::log((limit - 0.2) / 0.8));
    CHECK(std::fabs(depth_at_carbon_m(profile, limit).value() - exact) < 0.05e-6);
  }
}

TEST_CASE("depth at a carbon content: a surface that gave carbon up does not end the case") {
  // Poor at the surface (0.30), richest at 0.2 mm, falling beyond.
  const auto carbon = [](double x) {
    const double mm = 1e3 * x;
    return 0.2 + (0.1 + 3.0 * mm) * std::exp(-2.5 * mm);
  };
  const Profile profile = sampled(carbon);
  REQUIRE(profile.carbon_wt_pct.front() == doctest::Approx(0.30));
  const double depth = depth_at_carbon_m(profile, 0.35).value();
  CHECK(std::fabs(carbon(depth) - 0.35) < 1e-4);
  CHECK(carbon(depth + 1e-6) < carbon(depth));  // the deeper of the two crossings
  CHECK(depth > 0.4e-3);
}

TEST_CASE("depth at a carbon content: no case is 0, a core above the limit has no depth") {
  const Profile profile = sampled([](double x) { return 0.2 + 0.1 * std::exp(-1e3 * x); });
  CHECK(depth_at_carbon_m(profile, 0.35).value() == 0.0);
  CHECK_FALSE(depth_at_carbon_m(profile, 0.2).has_value());
  CHECK_FALSE(depth_at_carbon_m(profile, 0.15).has_value());
}

TEST_CASE("carbon taken up is stated in g/m2 by the density of austenite") {
  CarbonField field(std::make_shared<const Mesh>(make_mesh({})), 1, 0.2);
  field.crossed_wt_pct_m[0] = 0.41913e-3;  // wt% m; 31.9 g/m2 at 7600 kg/m3
  CHECK(std::fabs(carbon_uptake_g_m2(field, 0) - 31.9) < 0.06);
}

TEST_CASE("turnover depth: none while the surface gains, and none in a section at rest") {
  const CarbonField field(std::make_shared<const Mesh>(make_mesh({})), 1, 0.2);
  LaneConditions gas;
  gas.diffusivity = diffusivity_form(DiffusivityLaw::agren, 1203.15);
  gas.surface = {1.0, 1 / 1.3e-7, 0.0};
  CHECK_FALSE(turnover_depth_m(field, 0, gas).has_value());
  gas.surface.equilibrium_wt_pct = 0.2;
  CHECK_FALSE(turnover_depth_m(field, 0, gas).has_value());
}
