// Plate, cylinder and sphere with a convective surface, constant D, by their series. Source: Crank 1975,
// chapters 4 to 6; roots and figures also in H. S. Carslaw, J. C. Jaeger, Conduction of Heat in Solids.
#include <doctest/doctest.h>

#include <functional>
#include <initializer_list>
#include <vector>

#include "validation/exact_support.h"

using namespace hearthfront::solver;
using namespace hearthfront::testing;

namespace {

constexpr double half = 1.5e-3, beta = 1.3e-7;
constexpr double biot = beta * half / d_constant;  // 9.75

// One shape: its root equation, and one term of the series at the relative distance r from the centre.
struct Body {
  Shape shape;
  std::function<double(double)> root_equation;
  std::function<double(double, double)> term;
  double first_root;
  double at_surface, at_half, at_centre;  // fractions after 8 h
};

std::vector<double> roots(const std::function<double(double)>& f) {
  std::vector<double> found;
  for (double x = 1e-3; found.size() < 40; x += 0.02) {
    double low = x, high = x + 0.02;
    if (f(low) * f(high) > 0) continue;
    for (int i = 0; i < 60; ++i) {
      const double middle = 0.5 * (low + high);
      (f(low) * f(middle) <= 0 ? high : low) = middle;
    }
    found.push_back(low);
  }
  return found;
}

const std::vector<Body>& bodies() {
  static const std::vector<Body> all{
      {Shape::plate, [](double b) { return b * std::sin(b) - biot * std::cos(b); },
       [](double b, double r) {
         return 2 * biot * std::cos(b * r) / ((b * b + biot * biot + biot) * std::cos(b));
       },
       1.425609, 0.890126, 0.430888, 0.253711},
      {Shape::cylinder, [](double b) { return b * std::cyl_bessel_j(1, b) - biot * std::cyl_bessel_j(0, b); },
       [](double b, double r) {
         return 2 * biot * std::cyl_bessel_j(0, b * r) / ((b * b + biot * biot) * std::cyl_bessel_j(0, b));
       },
       2.174174, 0.941482, 0.661040, 0.534510},
      {Shape::sphere, [](double b) { return b * std::cos(b) - (1 - biot) * std::sin(b); },
       [](double b, double r) {
         const double ratio = r > 1e-9 ? std::sin(b * r) / r : b;
         return 2 * biot * ratio / ((b * b + biot * (biot - 1)) * std::sin(b));
       },
       2.828897, 0.973023, 0.827048, 0.752703}};
  return all;
}

double fraction(const Body& body, const std::vector<double>& b, double r, double t) {
  double sum = 0;
  for (double root : b) sum += body.term(root, r) * std::exp(-root * root * d_constant * t / (half * half));
  return 1 - sum;
}

}  // namespace

TEST_CASE("plate, cylinder and sphere of 1.5 mm: within 1e-4 of the series from 30 min to 8 h") {
  for (const Body& body : bodies()) {
    CAPTURE(static_cast<int>(body.shape));
    const std::vector<double> b = roots(body.root_equation);
    // The series as coded here, against published roots and computed figures.
    CHECK(std::fabs(b[0] - body.first_root) < 1e-6);
    CHECK(std::fabs(fraction(body, b, 1.0, 28800) - body.at_surface) < 1e-6);
    CHECK(std::fabs(fraction(body, b, 0.5, 28800) - body.at_half) < 1e-6);
    CHECK(std::fabs(fraction(body, b, 0.0, 28800) - body.at_centre) < 1e-6);

    double worst = 0;
    carburize(constant_part({body.shape, half, 0}, beta), 2 * std::sqrt(d_constant * 28800), 1.0, 28800,
              [&](double t, const Mesh& mesh, const CarbonField& field, const LaneConditions&) {
                if (std::fmod(t, 600) != 0 || t < 1800) return;
                for (std::size_t i = 0; i < mesh.nodes(); ++i) {
                  const double exact = fraction(body, b, 1 - mesh.depth_m[i] / half, t);
                  worst = std::max(worst, std::fabs((field.carbon_wt_pct(0, i) - 0.2) / 0.8 - exact));
                }
              });
    CHECK(worst < 1e-4);
  }
}

TEST_CASE("plate with a fixed surface: centre after 8 h, and the uptake of a saturated plate") {
  // 1 - (4/pi) sum (-1)^n/(2n+1) exp(-(2n+1)^2 pi^2 Fo/4), Fo = 0.256: 0.324446.
  double centre = 0;
  carburize(constant_part({Shape::plate, half, 0}, 1e3), 2 * std::sqrt(d_constant * 28800), 1.0, 28800,
            [&](double, const Mesh& mesh, const CarbonField& field, const LaneConditions&) {
              // A parabola through the last two nodes, flat at the centre.
              const std::size_t n = mesh.nodes();
              const double p = half - mesh.depth_m[n - 2], q = half - mesh.depth_m[n - 1];
              const double cp = field.carbon_wt_pct(0, n - 2), cq = field.carbon_wt_pct(0, n - 1);
              centre = cq - (cp - cq) * q * q / (p * p - q * q);
            });
  CHECK(std::fabs((centre - 0.2) / 0.8 - 0.324446) < 1e-4);

  // A thin plate ends in equilibrium with the gas everywhere: 0.8 wt% x 0.2 mm.
  carburize(constant_part({Shape::plate, 0.2e-3, 0}, 1e3), 1e-3, 1.0, 36000,
            [&](double t, const Mesh&, const CarbonField& field, const LaneConditions&) {
              if (t == 36000) CHECK(field.crossed_wt_pct_m[0] == doctest::Approx(0.8 * 0.2e-3).epsilon(1e-6));
            });
}
