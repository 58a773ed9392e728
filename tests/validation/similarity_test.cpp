// Carbon-dependent diffusivity, fixed surface: C depends on eta = x / sqrt(t) alone, -(eta/2) C' = (D C')'
// (L. Boltzmann 1894; Crank 1975, chapter 7). The equation is solved here by shooting; its depths and uptake
// are checked against figures computed outside this project, 930 degC, Cs 1.0, C0 0.2.
#include <doctest/doctest.h>

#include <initializer_list>
#include <vector>

#include "validation/exact_support.h"

using namespace hearthfront::solver;
using namespace hearthfront::testing;

namespace {

// C on an even grid of eta, and the constant q0 of the surface flux q0 / sqrt(t).
struct Similarity {
  double step;
  std::vector<double> carbon;
  double q0;

  double at(double eta) const {
    const double place = eta / step;
    const auto i = static_cast<std::size_t>(place);
    if (i + 1 >= carbon.size()) return carbon.back();
    const double share = place - static_cast<double>(i);
    return carbon[i] + share * (carbon[i + 1] - carbon[i]);
  }
  double eta_at(double limit) const {
    std::size_t i = 0;
    while (carbon[i + 1] > limit) ++i;
    return step * (static_cast<double>(i) + (carbon[i] - limit) / (carbon[i] - carbon[i + 1]));
  }
};

// Fourth-order Runge-Kutta from the surface for dC/deta = -q/D, dq/deta = -(eta/2) q/D.
Similarity integrate(const DiffusivityForm& form, double q0) {
  constexpr std::size_t steps = 8000;
  Similarity s{32e-6 / steps, {1.0}, q0};
  double c = 1.0, q = q0;
  const auto slope = [&](double eta, double carbon, double flux, double& dc, double& dq) {
    dc = -flux / diffusivity_m2_s(form, carbon);
    dq = 0.5 * eta * dc;
  };
  for (std::size_t i = 0; i < steps; ++i) {
    const double eta = static_cast<double>(i) * s.step, h = s.step;
    double c1, q1, c2, q2, c3, q3, c4, q4;
    slope(eta, c, q, c1, q1);
    slope(eta + h / 2, c + h / 2 * c1, q + h / 2 * q1, c2, q2);
    slope(eta + h / 2, c + h / 2 * c2, q + h / 2 * q2, c3, q3);
    slope(eta + h, c + h * c3, q + h * q3, c4, q4);
    c += h / 6 * (c1 + 2 * c2 + 2 * c3 + c4);
    q += h / 6 * (q1 + 2 * q2 + 2 * q3 + q4);
    s.carbon.push_back(c);
  }
  return s;
}

Similarity shoot(const DiffusivityForm& form) {
  double low = 0, high = 1e-5;  // more flux at the surface ends lower
  for (int i = 0; i < 60; ++i) {
    const double middle = 0.5 * (low + high);
    (integrate(form, middle).carbon.back() > 0.2 ? low : high) = middle;
  }
  return integrate(form, 0.5 * (low + high));
}

struct Figures {
  DiffusivityLaw law;
  double eta[5];     // 1e-6 m/s^0.5 at 0.8, 0.6, 0.4, 0.35, 0.3 wt%
  double uptake;     // 1e-6 wt% m/s^0.5
  double depths[5];  // mm after 4 h
};

}  // namespace

TEST_CASE("D(C): depths, uptake and whole profile follow the similarity solution") {
  const double limits[] = {0.8, 0.6, 0.4, 0.35, 0.3};
  for (const Figures& figures : {Figures{DiffusivityLaw::agren,
                                         {2.364, 4.569, 7.058, 7.857, 8.853},
                                         3.953,
                                         {0.2837, 0.5482, 0.8469, 0.9429, 1.0623}},
                                 Figures{DiffusivityLaw::tibbetts,
                                         {2.523, 4.808, 7.328, 8.128, 9.120},
                                         4.115,
                                         {0.3027, 0.5770, 0.8793, 0.9753, 1.0944}}}) {
    CAPTURE(static_cast<int>(figures.law));
    const Similarity exact = shoot(diffusivity_form(figures.law, 1203.15));
    for (std::size_t i = 0; i < 5; ++i)
      CHECK(std::fabs(1e6 * exact.eta_at(limits[i]) - figures.eta[i]) < 1e-3);
    CHECK(std::fabs(2e6 * exact.q0 - figures.uptake) < 1e-3);

    CarburizingPart part = constant_part({Shape::plate, 10e-3, 0}, 1e3);
    part.law = figures.law;
    for (double total_s : {14400.0, 28800.0}) {
      const std::vector<TimeAtTemperature> pieces{{total_s, 930}};
      double worst = 0;
      carburize(
          part, expected_diffusion_length_m(figures.law, pieces), 1.0, total_s,
          [&](double t, const Mesh& mesh, const CarbonField& field, const LaneConditions& conditions) {
            if (t < 1800) return;
            for (std::size_t i = 0; i < mesh.nodes(); ++i)
              worst = std::max(
                  worst,
                  std::fabs(field.carbon_wt_pct(0, i) - exact.at(mesh.depth_m[i] / std::sqrt(t))) / 0.8);
            CHECK(field.crossed_wt_pct_m[0] == doctest::Approx(2 * exact.q0 * std::sqrt(t)).epsilon(2e-3));
            if (t != 14400 || total_s != 14400) return;
            const Profile profile = read_profile(field, 0, conditions);
            for (std::size_t i = 0; i < 5; ++i)
              CHECK(std::fabs(1e3 * depth_at_carbon_m(profile, limits[i]).value() - figures.depths[i]) <
                    2e-4);
          });
      CAPTURE(total_s);
      CHECK(worst < 1e-4);
    }
  }
}
