// The independent integrator (support/plain_integrator.h) is fit to be the truth of the coverage tests: it
// agrees with CVODE, with exact series and with Boltzmann's similarity solution.
#include <doctest/doctest.h>

#include <cmath>
#include <string>

#include "support/plain_integrator.h"
#include "support/same_cycle.h"

using namespace hearthfront::testing;
namespace solver = hearthfront::solver;

namespace {

PlainSteel plain(const solver::Composition& s) {
  return {s.mn_wt_pct, s.cr_wt_pct, s.ni_wt_pct, s.mo_wt_pct, s.si_wt_pct};
}

// By CVODE, fine enough for 0.01 um (tests/validation/cvode_test.cpp).
ReferenceResult cvode(const solver::CarburizingPart& part,
                      const std::vector<solver::IntervalInputs>& inputs) {
  ReferenceProblem problem = reference_problem(part, inputs);
  problem.face_m = reference_faces(part.section.extent_m, 1e-6, 1.04, 5e-6, 2.2e-3, 1.08);
  ReferenceOptions options;
  options.relative_tolerance = 1e-7;
  options.absolute_tolerance_wt_pct = 1e-8;
  options.restart_at_pieces = true;
  return solve_reference(problem, options);
}

// All in one gas at one temperature of the part, in minutes.
void hold(PlainIntegrator& integrator, double hours, double degc, double potential, double transfer) {
  for (int minute = 0; minute < 60 * hours; ++minute)
    integrator.advance({60, degc, potential, transfer, true});
}

}  // namespace

TEST_CASE("plate and cylinder under noisy minutes: depths within 0.5 um of CVODE") {
  for (const auto shape : {PlainShape::plate, PlainShape::cylinder}) {
    solver::CarburizingPart part;
    part.section = {shape == PlainShape::plate ? solver::Shape::plate : solver::Shape::cylinder, 8e-3, 0};
    part.steel = case_steel(shape == PlainShape::plate ? "20MnCr5" : "18CrNiMo7-6").composition;
    part.core_carbon_wt_pct = part.steel.c_wt_pct;
    part.beta_m_per_s = 1.25e-7;
    const auto inputs = noisy_eight_hours(31);
    const ReferenceResult exact = cvode(part, inputs);
    PlainPart truth;
    truth.shape = shape;
    truth.extent_m = part.section.extent_m;
    truth.steel = plain(part.steel);
    truth.core_wt_pct = truth.nominal_core_wt_pct = part.core_carbon_wt_pct;
    truth.diffusion_length_m = diffusion_length_m(inputs);
    PlainIntegrator integrator(truth, 850);
    const double initial = integrator.inside_wt_pct_m();
    for (const auto& in : inputs)
      integrator.advance({60, *in.load_temperature_degc, in.carbon_potential_wt_pct, 1.25e-7, true});
    for (double limit : {part.core_carbon_wt_pct + 0.04, 0.30, 0.35, 0.40, 0.50, 0.60, 0.70}) {
      CAPTURE(limit);
      CHECK(std::fabs(integrator.depth_at_m(limit) - exact.depth_at_m(limit)) < 0.5e-6);
    }
    // Conservative by construction; Newton's method leaves 1e-9.
    CHECK(std::fabs(integrator.inside_wt_pct_m() - initial - integrator.crossed_wt_pct_m()) < 1e-9 * initial);
  }
}

TEST_CASE("slab, cylinder and sphere with convection: exact series of Carslaw and Jaeger within 1e-3") {
  // Crank, The Mathematics of Diffusion (1975); Carslaw and Jaeger: l = a = 1.5 mm, D 2e-11, beta 1.3e-7, 8
  // h, so Bi 9.75, Fo 0.256. Fractions (C - C0)/(Cp - C0) at surface, half way, centre.
  struct Body {
    PlainShape shape;
    double surface, half, centre;
  };
  for (const Body& body : {Body{PlainShape::plate, 0.890126, 0.430888, 0.253711},
                           Body{PlainShape::cylinder, 0.941482, 0.661040, 0.534510},
                           Body{PlainShape::sphere, 0.973023, 0.827048, 0.752703}}) {
    PlainPart part;
    part.shape = body.shape;
    part.extent_m = 1.5e-3;
    part.law = PlainLaw::constant;
    part.constant_diffusivity_m2_s = 2e-11;
    part.diffusion_length_m = 1.5e-3;
    PlainIntegrator integrator(part, 930);
    hold(integrator, 8, 930, 1.0, 1.3e-7);
    const auto fraction = [&](double depth_m) { return (integrator.carbon_at_wt_pct(depth_m) - 0.2) / 0.8; };
    // Centres of the outermost and innermost cells lie inside: a cubic reaches the faces.
    CHECK(std::fabs(fraction(0) - body.surface) < 1e-3);
    CHECK(std::fabs(fraction(0.75e-3) - body.half) < 1e-3);
    CHECK(std::fabs(fraction(1.5e-3) - body.centre) < 1e-3);
  }
}

TEST_CASE("Tibbetts' D(C) behind a fixed surface: Boltzmann's similarity solution within 0.5 um") {
  // Boltzmann similarity, -(eta/2) C' = (D C')', 930 degC, surface 1.0, core 0.2, 4 h: depths computed
  // outside this project, printed to 0.1 um.
  PlainPart part;
  part.law = PlainLaw::tibbetts;
  PlainIntegrator integrator(part, 930);
  hold(integrator, 4, 930, 1.0, 1.0);
  const double limit[] = {0.8, 0.6, 0.4, 0.35, 0.3}, depth_mm[] = {0.3027, 0.5770, 0.8793, 0.9753, 1.0944};
  for (std::size_t i = 0; i < 5; ++i) {
    CAPTURE(limit[i]);
    CHECK(std::fabs(1e3 * integrator.depth_at_m(limit[i]) - depth_mm[i]) < 0.5e-3);
  }
}

TEST_CASE("half the cells and steps move depths by less than 0.5 um, behind a lag and with a film") {
  const auto depth_m = [](double fineness) {
    PlainPart part;
    part.steel = plain(case_steel("16MnCr5").composition);
    part.core_wt_pct = part.nominal_core_wt_pct = 0.165;
    part.film_s = 900;
    PlainIntegrator integrator(part, 20, fineness);
    for (const auto& in : noisy_eight_hours(32))
      integrator.advance({60, in.furnace_temperature_degc, in.carbon_potential_wt_pct,
                          plain_transfer_m_per_s(0.2, 0.4), false, true});
    return integrator.depth_at_m(0.35);
  };
  CHECK(std::fabs(depth_m(1) - depth_m(2)) < 0.5e-6);
}
