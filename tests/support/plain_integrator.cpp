#include "support/plain_integrator.h"

#include <algorithm>
#include <cmath>
#include <stdexcept>

namespace hearthfront::testing {
namespace {

// Share of the outer surface that is left at a depth.
double area(const PlainPart& part, double depth_m) {
  const double left = 1 - depth_m / part.extent_m;
  if (part.shape == PlainShape::cylinder) return left;
  return part.shape == PlainShape::sphere ? left * left : 1.0;
}

// Volume from the surface down to a depth, per unit of surface.
double volume_to(const PlainPart& part, double depth_m) {
  const double left = 1 - depth_m / part.extent_m;
  if (part.shape == PlainShape::cylinder) return part.extent_m * (1 - left * left) / 2;
  if (part.shape == PlainShape::sphere) return part.extent_m * (1 - left * left * left) / 3;
  return depth_m;
}

std::vector<double> faces(const PlainPart& part, double fineness) {
  const double bulk = part.diffusion_length_m / (38 * fineness);
  std::vector<double> face{0.0};
  double width = 2e-6 / fineness;
  while (face.back() < part.extent_m) {
    face.push_back(face.back() + width);
    const bool in_case = face.back() < 1.7 * part.diffusion_length_m;
    width = in_case ? std::min(std::max(bulk, 2e-6 / fineness), width * (1 + 0.09 / fineness))
                    : width * (1 + 0.15 / fineness);
  }
  const double scale = part.extent_m / face.back();
  for (double& x : face) x *= scale;
  return face;
}

}  // namespace

double plain_transfer_m_per_s(double co_fraction, double h2_fraction) {
  return 1.25e-7 * co_fraction * std::sqrt(h2_fraction) / (0.20 * std::sqrt(0.40));
}

PlainIntegrator::PlainIntegrator(const PlainPart& part, double charge_degc, double fineness)
    : part_(part), fineness_(fineness), part_degc_(charge_degc) {
  const PlainSteel& s = part.steel;
  // Gunnarson 1967; radiotracer data, Trans. JIM 17 (1976) 630; Andrews 1965.
  alloy_factor_ = std::pow(10.0, 0.055 * s.si_wt_pct - 0.013 * s.mn_wt_pct - 0.040 * s.cr_wt_pct +
                                     0.014 * s.ni_wt_pct - 0.013 * s.mo_wt_pct);
  diffusivity_factor_ = std::clamp(1 - 0.107 * s.cr_wt_pct, 0.75, 1.1) * part.diffusivity_scale;
  austenite_from_degc_ = 910 - 203 * std::sqrt(part.nominal_core_wt_pct) + 44.7 * s.si_wt_pct -
                         15.2 * s.ni_wt_pct + 31.5 * s.mo_wt_pct - 30 * s.mn_wt_pct - 11 * s.cr_wt_pct;
  const std::vector<double> face = faces(part, fineness);
  const std::size_t n = face.size() - 1;
  conductance_.assign(n + 1, 0.0);
  for (std::size_t i = 0; i < n; ++i) {
    centre_.push_back(0.5 * (face[i] + face[i + 1]));
    volume_.push_back(volume_to(part, face[i + 1]) - volume_to(part, face[i]));
    if (i > 0) conductance_[i] = area(part, face[i]) / (centre_[i] - centre_[i - 1]);
  }
  carbon_.assign(n, part.core_wt_pct);
  for (auto* each : {&whole_, &half_, &halves_, &upper_, &right_}) each->resize(n);
}

// D and dD/dC.
void PlainIntegrator::diffusivity(double c, double t, double& d, double& slope) const {
  switch (part_.law) {
    case PlainLaw::agren: {
      const double ratio = 55.845 / 12.011;
      const double y = ratio * c / (100 - c), dy = ratio * 100 / ((100 - c) * (100 - c));
      const double hump = 8339.9 / t, cold = 1 / t - 2.221e-4;
      const double bulge = 1 + y * (1 - y) * hump;
      d = 4.53e-7 * bulge * std::exp(-cold * (17767 - 26436 * y));
      slope = d * dy * ((1 - 2 * y) * hump / bulge + cold * 26436);
      break;
    }
    case PlainLaw::tibbetts:
      d = 0.47e-4 * std::exp(-1.6 * c - (37000 - 6600 * c) / (1.987 * t));
      slope = d * (-1.6 + 6600 / (1.987 * t));
      break;
    case PlainLaw::constant:
      d = part_.constant_diffusivity_m2_s;
      slope = 0;
  }
  d *= diffusivity_factor_;
  slope *= diffusivity_factor_;
}

// Newton on volume (to - from) = step (flux in - flux out), cell by cell; elimination from the surface.
void PlainIntegrator::euler(const std::vector<double>& from, std::vector<double>& to, double& crossed,
                            double step_s, const Gas& gas) {
  const std::size_t n = from.size();
  for (int turn = 0; turn < 30; ++turn) {
    double d, slope;
    diffusivity(to[0], gas.kelvin, d, slope);
    double in = 0, in_by_inner = 0;  // flux into the cell from above, and what its own carbon does to it
    if (gas.transfer_m_per_s > 0) {
      const double half_cell = centre_[0] / d;
      const double through = 1 / (1 / gas.transfer_m_per_s + half_cell);
      in = through * (gas.equilibrium_wt_pct - to[0]);
      in_by_inner = -through + in * through * half_cell * slope / d;
    }
    const double in_at_surface = in, in_by_surface = in_by_inner;
    double in_by_outer = 0;
    for (std::size_t i = 0; i < n; ++i) {
      double out = 0, out_by_own = 0, out_by_next = 0;
      if (i + 1 < n) {
        diffusivity(0.5 * (to[i] + to[i + 1]), gas.kelvin, d, slope);
        const double drop = conductance_[i + 1] * (to[i] - to[i + 1]);
        out = d * drop;
        out_by_own = 0.5 * slope * drop + d * conductance_[i + 1];
        out_by_next = 0.5 * slope * drop - d * conductance_[i + 1];
      }
      const double lower = -step_s * in_by_outer, own = volume_[i] + step_s * (out_by_own - in_by_inner);
      const double residual = volume_[i] * (to[i] - from[i]) - step_s * (in - out);
      const double pivot = i > 0 ? own - lower * upper_[i - 1] : own;
      upper_[i] = step_s * out_by_next / pivot;
      right_[i] = (-residual - (i > 0 ? lower * right_[i - 1] : 0.0)) / pivot;
      in = out;
      in_by_outer = out_by_own;
      in_by_inner = out_by_next;
    }
    double largest = 0;
    for (std::size_t i = n; i-- > 0;) {
      if (i + 1 < n) right_[i] -= upper_[i] * right_[i + 1];
      to[i] += right_[i];
      largest = std::max(largest, std::fabs(right_[i]));
    }
    crossed = step_s * (in_at_surface + in_by_surface * right_[0]);
    if (!std::isfinite(largest)) break;
    // Quadratic: what is left after a change of 1e-6 is about 1e-12.
    if (largest < 1e-6) return;
  }
  throw std::runtime_error("plain integrator: Newton's method does not settle");
}

void PlainIntegrator::step(double step_s, const Gas& gas) {
  double crossed_whole = 0, crossed_first = 0, crossed_second = 0;
  half_ = carbon_;
  euler(carbon_, half_, crossed_first, 0.5 * step_s, gas);
  halves_ = half_;
  euler(half_, halves_, crossed_second, 0.5 * step_s, gas);
  whole_ = halves_;
  euler(carbon_, whole_, crossed_whole, step_s, gas);
  for (std::size_t i = 0; i < carbon_.size(); ++i) carbon_[i] = 2 * halves_[i] - whole_[i];
  crossed_ += 2 * (crossed_first + crossed_second) - crossed_whole;
}

void PlainIntegrator::advance(const PlainPiece& piece) {
  double mean_degc = piece.temperature_degc;
  if (!piece.of_the_part) {  // a lumped body behind the furnace
    const double decay = std::exp(-piece.duration_s / part_.lag_s), behind = part_degc_ - mean_degc;
    mean_degc += behind * part_.lag_s / piece.duration_s * (1 - decay);
    part_degc_ = piece.temperature_degc + behind * decay;
  } else {
    part_degc_ = mean_degc;
  }
  if (!(mean_degc > austenite_from_degc_)) return;
  const double hundreds = (mean_degc - 900) / 100;
  const double cementite = 1.2276 + 0.2933 * hundreds + 0.01457 * hundreds * hundreds;
  Gas gas{mean_degc + 273.15, std::min(piece.carbon_potential_wt_pct / alloy_factor_, cementite),
          piece.transfer_m_per_s * alloy_factor_};
  if (piece.transfer_by_temperature)
    gas.transfer_m_per_s *= std::exp(-34900 / 8.314463 * (1 / gas.kelvin - 1 / (940 + 273.15)));
  if (std::fabs(piece.carbon_potential_wt_pct - last_potential_) > 0.03 ||
      std::fabs(mean_degc - last_degc_) > 10)
    since_jump_s_ = 0;
  last_potential_ = piece.carbon_potential_wt_pct;
  last_degc_ = mean_degc;
  for (double left = piece.duration_s; left > 1e-9;) {
    const double longest = std::max(5.0, 0.4 * since_jump_s_) / fineness_;
    const double pieces = std::ceil(left / std::min({longest, left, 120.0 / fineness_}));
    const double step_s = left / pieces;
    Gas now = gas;
    if (part_.film_s > 0) now.transfer_m_per_s *= -std::expm1(-(in_gas_s_ + 0.5 * step_s) / part_.film_s);
    step(step_s, now);
    left -= step_s;
    since_jump_s_ += step_s;
    if (gas.transfer_m_per_s > 0) in_gas_s_ += step_s;
  }
}

namespace {

double cubic(const std::vector<double>& x, const std::vector<double>& c, std::size_t first, double at) {
  double sum = 0;
  for (std::size_t p = first; p < first + 4; ++p) {
    double weight = c[p];
    for (std::size_t q = first; q < first + 4; ++q)
      if (q != p) weight *= (at - x[q]) / (x[p] - x[q]);
    sum += weight;
  }
  return sum;
}

std::size_t first_of_four(std::size_t above, std::size_t n) {
  return std::min(above >= 2 ? above - 2 : 0, n - 4);
}

}  // namespace

double PlainIntegrator::depth_at_m(double limit) const {
  std::size_t i = carbon_.size() - 1;
  while (i > 0 && carbon_[i - 1] < limit) --i;
  if (i == 0) return 0.0;
  const std::size_t first = first_of_four(i, carbon_.size());
  double low = centre_[i - 1], high = centre_[i];
  while (high - low > 1e-12)
    (cubic(centre_, carbon_, first, 0.5 * (low + high)) >= limit ? low : high) = 0.5 * (low + high);
  return 0.5 * (low + high);
}

double PlainIntegrator::carbon_at_wt_pct(double depth_m) const {
  const auto above = std::upper_bound(centre_.begin(), centre_.end(), depth_m) - centre_.begin();
  return cubic(centre_, carbon_, first_of_four(static_cast<std::size_t>(above), carbon_.size()), depth_m);
}

double PlainIntegrator::inside_wt_pct_m() const {
  double sum = 0;
  for (std::size_t i = 0; i < carbon_.size(); ++i) sum += volume_[i] * carbon_[i];
  return sum;
}

}  // namespace hearthfront::testing
