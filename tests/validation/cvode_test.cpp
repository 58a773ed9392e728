// The same equations solved by SUNDIALS CVODE on an independent discretisation (support/cvode_reference.h),
// with noisy minute data: depths within 0.2 um, and the depth of turnover.
#include <doctest/doctest.h>

#include <cmath>
#include <initializer_list>
#include <string>

#include "support/paths.h"
#include "support/same_cycle.h"

using namespace hearthfront::solver;
using namespace hearthfront::testing;

namespace {

struct Case {
  std::string steel;
  Section section;
  std::uint32_t seed;
};

CarburizingPart part_of(const Case& c) {
  CarburizingPart part;
  part.section = c.section;
  part.steel = case_steel(c.steel.c_str()).composition;
  part.core_carbon_wt_pct = part.steel.c_wt_pct;
  part.beta_m_per_s = 1.25e-7;
  return part;
}

// Fine enough for 0.01 um, see "converged" below.
ReferenceResult reference(const CarburizingPart& part, const std::vector<IntervalInputs>& inputs,
                          double scale) {
  ReferenceProblem problem = reference_problem(part, inputs);
  problem.face_m = reference_faces(part.section.extent_m, 1e-6 * scale, 1 + 0.04 * scale, 5e-6 * scale,
                                   2.2e-3, 1 + 0.08 * scale);
  ReferenceOptions options;
  options.relative_tolerance = 1e-7;
  options.absolute_tolerance_wt_pct = 1e-8;
  options.restart_at_pieces = true;
  return solve_reference(problem, options);
}

GasCarburizing::State solved(const CarburizingPart& part, const std::vector<IntervalInputs>& inputs) {
  MeshDensity density;
  density.diffusion_length_m = diffusion_length_m(inputs);
  const GasCarburizing model(part, density);
  GasCarburizing::State state = model.start(850);
  run(model, state, inputs);
  return state;
}

}  // namespace

TEST_CASE("plate, cylinder and bore under noisy minutes: depths within 0.2 um of CVODE") {
  for (const Case& test_case :
       {Case{"20MnCr5", {Shape::plate, 10e-3, 0}, 11}, Case{"18CrNiMo7-6", {Shape::cylinder, 8e-3, 0}, 12},
        Case{"8620", {Shape::bore, 8e-3, 10e-3}, 13}}) {
    CAPTURE(test_case.steel);
    const CarburizingPart part = part_of(test_case);
    const auto inputs = noisy_eight_hours(test_case.seed);
    const ReferenceResult exact = reference(part, inputs, 1);
    const GasCarburizing::State state = solved(part, inputs);
    const Profile profile = read_profile(state.field, 0, state.conditions[0]);
    for (double limit : {part.core_carbon_wt_pct + 0.04, 0.30, 0.35, 0.40, 0.50, 0.60, 0.70}) {
      CAPTURE(limit);
      CHECK(std::fabs(depth_at_carbon_m(profile, limit).value() - exact.depth_at_m(limit)) < 0.2e-6);
    }
    // CVODE's first cell is centred half a micrometre inside: straight on to the surface.
    const auto& c0 = exact.carbon_wt_pct;
    const auto& x0 = exact.depth_m;
    const double surface = c0[0] + (c0[0] - c0[1]) / (x0[1] - x0[0]) * x0[0];
    // A step of one minute does not resolve how the outermost micrometres follow each minute's noise (0.014
    // wt% from one to the next): a tenth of that.
    CHECK(std::fabs(profile.carbon_wt_pct[0] - surface) < 1.4e-3);
  }
}

TEST_CASE("film, time outside gas, dips below austenite, measured gas: depths within 0.2 um of CVODE") {
  for (const ProcessPath& path : process_paths(21)) {
    if (!path.rework.empty()) continue;
    CAPTURE(path.name);
    CarburizingPart part = part_of({"16MnCr5", {Shape::plate, 10e-3, 0}, 0});
    part.film_s = path.film_s;
    const ReferenceResult exact = reference(part, path.inputs, 1.4);
    const GasCarburizing::State state = solved(part, path.inputs);
    const Profile profile = read_profile(state.field, 0, state.conditions[0]);
    for (double limit : {part.core_carbon_wt_pct + 0.04, 0.30, 0.35, 0.40, 0.50, 0.60}) {
      CAPTURE(limit);
      CHECK(std::fabs(depth_at_carbon_m(profile, limit).value() - exact.depth_at_m(limit)) < 0.2e-6);
    }
  }
}

TEST_CASE("the reference itself is converged to 0.02 um") {
  const CarburizingPart part = part_of({"20MnCr5", {Shape::plate, 10e-3, 0}, 11});
  auto inputs = noisy_eight_hours(11);
  inputs.resize(360);
  const ReferenceResult fine = reference(part, inputs, 1), coarse = reference(part, inputs, 1.6);
  for (double limit : {0.30, 0.35, 0.40, 0.60}) {
    CAPTURE(limit);
    CHECK(std::fabs(fine.depth_at_m(limit) - coarse.depth_at_m(limit)) < 0.02e-6);
  }
}

TEST_CASE("turnover depth in diffuse: within 2 um of the reference's own dC/dt") {
  const CarburizingPart part = part_of({"8620", {Shape::cylinder, 8e-3, 0}, 14});
  auto inputs = constant_inputs(3 * 3600, 930, 1.10);
  const auto diffuse = constant_inputs(3600, 930, 0.75);
  inputs.insert(inputs.end(), diffuse.begin(), diffuse.end());
  for (std::size_t minutes : {185u, 200u, 240u}) {
    CAPTURE(minutes);
    const std::vector<IntervalInputs> until(inputs.begin(),
                                            inputs.begin() + static_cast<std::ptrdiff_t>(minutes));
    const ReferenceResult exact = reference(part, until, 1);
    double turnover = 0;
    for (std::size_t i = 1; i < exact.depth_m.size() && exact.depth_m[i] < 2e-3; ++i) {
      const double before = exact.rate_wt_pct_s[i - 1], after = exact.rate_wt_pct_s[i];
      if (before < 0 && after >= 0)
        turnover =
            exact.depth_m[i - 1] + (exact.depth_m[i] - exact.depth_m[i - 1]) * before / (before - after);
    }
    REQUIRE(turnover > 0);
    const GasCarburizing::State state = solved(part, until);
    CHECK(std::fabs(turnover_depth_m(state.field, 0, state.conditions[0]).value() - turnover) < 2e-6);
  }
  // And none in boost.
  const std::vector<IntervalInputs> boost(inputs.begin(), inputs.begin() + 170);
  const GasCarburizing::State state = solved(part, boost);
  CHECK_FALSE(turnover_depth_m(state.field, 0, state.conditions[0]).has_value());
}
