// Kirchhoff's potential under the step, as the baseline kernel computes it.
#include <doctest/doctest.h>

#include <array>
#include <cmath>
#include <initializer_list>

#include "solver/diffusion/potential.h"

using namespace hearthfront::solver;

namespace {

struct Value {
  double phi, diffusivity;
};
Value at(const Potential<1>& potential, double carbon) {
  Pack<2> d;
  std::array<double, 2> phi{}, slope{};
  potential.value(Pack<2>::all(carbon), d).store(phi.data());
  d.store(slope.data());
  return {phi[0], slope[0]};
}

Potential<1> potential_of(const DiffusivityForm& form) {
  return Potential<1>([&](std::size_t) -> const DiffusivityForm& { return form; });
}

}  // namespace

TEST_CASE("the potential's derivative is the law: 1e-7 up to 1.6 wt% carbon, 1e-5 up to 1.9") {
  for (DiffusivityLaw law : {DiffusivityLaw::agren, DiffusivityLaw::tibbetts})
    for (double t : {1000.0, 1073.15, 1203.15, 1323.15, 1600.0}) {
      const DiffusivityForm form = diffusivity_form(law, t, 0.9);
      const Potential<1> potential = potential_of(form);
      for (int i = 0; i <= 190; ++i) {
        const double carbon = 0.01 * i;
        CAPTURE(t);
        CAPTURE(carbon);
        CHECK(at(potential, carbon).diffusivity ==
              doctest::Approx(diffusivity_m2_s(form, carbon)).epsilon(carbon <= 1.6 ? 1e-7 : 1e-5).scale(0));
      }
    }
}

TEST_CASE("the potential of a constant diffusivity is a straight line") {
  const Potential<1> potential = potential_of(diffusivity_form(DiffusivityLaw::constant, 1200, 1, 2e-11));
  CHECK(at(potential, 1.2).phi - at(potential, 0.2).phi == doctest::Approx(2e-11).epsilon(1e-13));
  CHECK(at(potential, 0.1).diffusivity == doctest::Approx(2e-11).epsilon(1e-13));
}

TEST_CASE("steady flux through a wall is the difference of the potential over its thickness") {
  // int D dC at 930 degC between 0.2 and 1.0 wt%, wt% m2/s; computed by quadrature of the published laws.
  const Potential<1> agren = potential_of(diffusivity_form(DiffusivityLaw::agren, 1203.15));
  CHECK(at(agren, 1.0).phi - at(agren, 0.2).phi == doctest::Approx(1.3874e-11).epsilon(5e-5));
  const Potential<1> tibbetts = potential_of(diffusivity_form(DiffusivityLaw::tibbetts, 1203.15));
  CHECK(at(tibbetts, 1.0).phi - at(tibbetts, 0.2).phi == doctest::Approx(1.4846e-11).epsilon(5e-5));
}

TEST_CASE("lanes of a potential are what each form gives alone, bit for bit") {
  std::array<DiffusivityForm, 8> forms;
  for (std::size_t l = 0; l < 8; ++l)
    forms[l] = diffusivity_form(DiffusivityLaw::agren, 1150.0 + 10.0 * static_cast<double>(l), 1.0);
  const Potential<8> together([&](std::size_t l) -> const DiffusivityForm& { return forms[l]; });
  alignas(64) std::array<double, 8> phi{}, diffusivity{};
  for (double carbon : {0.05, 0.2, 0.731, 1.3}) {
    Pack<8> d;
    together.value(Pack<8>::all(carbon), d).store(phi.data());
    d.store(diffusivity.data());
    for (std::size_t l = 0; l < 8; ++l) {
      const Value alone = at(potential_of(forms[l]), carbon);
      CHECK(phi[l] == alone.phi);
      CHECK(diffusivity[l] == alone.diffusivity);
    }
  }
}
