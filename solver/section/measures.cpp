#include "solver/section/measures.h"

#include <algorithm>
#include <cmath>

#include "solver/material/constants.h"

namespace hearthfront::solver {
namespace {

// Cubic through four nodes (Lagrange).
double cubic_at(const double* x, const double* y, double at) {
  double sum = 0.0;
  for (int p = 0; p < 4; ++p) {
    double weight = y[p];
    for (int q = 0; q < 4; ++q)
      if (q != p) weight *= (at - x[q]) / (x[p] - x[q]);
    sum += weight;
  }
  return sum;
}

}  // namespace

Profile read_profile(const CarbonField& field, std::size_t lane, const LaneConditions& conditions) {
  const std::size_t n = field.mesh->cells();
  Profile profile;
  profile.depth_m.reserve(n + 1);
  profile.carbon_wt_pct.reserve(n + 1);
  profile.depth_m.push_back(0.0);
  profile.carbon_wt_pct.push_back(surface_state(field, lane, conditions).carbon_wt_pct);
  for (std::size_t i = 0; i < n; ++i) {
    profile.depth_m.push_back(field.mesh->centre_m[i]);
    profile.carbon_wt_pct.push_back(field.carbon_wt_pct(lane, i));
  }
  return profile;
}

std::optional<double> depth_at_carbon_m(const Profile& profile, double limit) {
  const auto& x = profile.depth_m;
  const auto& c = profile.carbon_wt_pct;
  if (c.back() >= limit) return std::nullopt;
  std::size_t i = c.size() - 1;
  while (i > 0 && c[i - 1] < limit) --i;
  if (i == 0) return 0.0;
  // c[i-1] >= limit > c[i]. The cubic passes through both nodes, so the bracket holds a root of it.
  const std::size_t first = std::min(i >= 2 ? i - 2 : 0, x.size() - 4);
  double low = x[i - 1], high = x[i];
  for (int step = 0; step < 60 && high - low > 1e-13; ++step) {
    const double middle = 0.5 * (low + high);
    (cubic_at(&x[first], &c[first], middle) >= limit ? low : high) = middle;
  }
  return 0.5 * (low + high);
}

std::optional<double> turnover_depth_m(const CarbonField& field, std::size_t lane,
                                       const LaneConditions& conditions) {
  const Mesh& mesh = *field.mesh;
  const std::size_t n = mesh.cells();
  double flux_in = surface_state(field, lane, conditions).flux_wt_pct_m_per_s;
  double previous = 0.0;
  std::optional<double> turnover;
  for (std::size_t i = 0; i < n; ++i) {
    double flux_out = 0.0;
    if (i + 1 < n) {
      const double here = field.carbon_wt_pct(lane, i), next = field.carbon_wt_pct(lane, i + 1);
      flux_out = mesh.conductance_per_m[i + 1] *
                 diffusivity_m2_s(conditions.diffusivity, 0.5 * (here + next)) * (here - next);
    }
    const double gain = (flux_in - flux_out) / mesh.volume_m[i];
    if (i > 0 && previous < 0.0 && gain > 0.0) {
      const double share = previous / (previous - gain);
      turnover = mesh.centre_m[i - 1] + share * (mesh.centre_m[i] - mesh.centre_m[i - 1]);
    }
    // Far ahead of the front gains are round-off; a sign there means nothing.
    constexpr double no_change_wt_pct_per_s = 1e-12;
    if (std::fabs(gain) > no_change_wt_pct_per_s) previous = gain;
    flux_in = flux_out;
  }
  return turnover;
}

double carbon_uptake_g_m2(const CarbonField& field, std::size_t lane) {
  constexpr double g_per_kg = 1000.0, per_cent = 100.0;
  return field.crossed_wt_pct_m[lane] * austenite_density_kg_m3 * g_per_kg / per_cent;
}

double balance_residual(const CarbonField& field, std::size_t lane, double initial) {
  const double crossed = field.crossed_wt_pct_m[lane];
  return (field.inventory_wt_pct_m(lane) - initial - crossed) / std::max(std::fabs(crossed), initial);
}

}  // namespace hearthfront::solver
