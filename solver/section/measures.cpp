#include "solver/section/measures.h"

#include <algorithm>
#include <cmath>
#include <cstddef>
#include <numeric>

#include "solver/diffusion/potential.h"
#include "solver/material/constants.h"
#include "solver/section/cubic.h"

namespace hearthfront::solver {
namespace {

// What every node's row gains (flux in minus flux out), and dC/dt at the nodes: the gains through the inverse
// of the mesh's mass rows.
struct Change {
  std::vector<double> gain, rate;
};
Change carbon_change(const CarbonField& field, std::size_t lane, const LaneConditions& conditions) {
  const Mesh& mesh = *field.mesh;
  const std::size_t n = mesh.nodes();
  Change change{std::vector<double>(n), {}};
  std::vector<double> phi(n), pivot(n);
  const Potential<1> potential([&](std::size_t) -> const DiffusivityForm& { return conditions.diffusivity; });
  for (std::size_t i = 0; i < n; i += 2)
    potential.value(Pack<2>::from([&](std::size_t k) { return field.carbon_wt_pct(lane, i + k); }))
        .store(&phi[i]);
  double flux_in = surface_state(field, lane, conditions).flux_wt_pct_m_per_s;
  for (std::size_t i = 0; i < n; ++i) {
    const double flux_out = i + 1 < n ? mesh.conductance_per_m[i + 1] * (phi[i] - phi[i + 1]) : 0.0;
    change.gain[i] = flux_in - flux_out;
    flux_in = flux_out;
  }
  change.rate = change.gain;
  std::vector<double>& rate = change.rate;
  for (std::size_t i = 0; i < n; ++i) {
    pivot[i] = mesh.mass_diagonal_m[i];
    if (i > 0) {
      const double share = mesh.mass_lower_m[i] / pivot[i - 1];
      pivot[i] -= share * mesh.mass_upper_m[i - 1];
      rate[i] -= share * rate[i - 1];
    }
  }
  rate[n - 1] /= pivot[n - 1];
  for (std::size_t i = n - 1; i-- > 0;) rate[i] = (rate[i] - mesh.mass_upper_m[i] * rate[i + 1]) / pivot[i];
  return change;
}

}  // namespace

Profile read_profile(const CarbonField& field, std::size_t lane, const LaneConditions& conditions) {
  Profile profile;
  profile.depth_m = field.mesh->depth_m;
  profile.carbon_wt_pct.reserve(profile.depth_m.size());
  profile.carbon_wt_pct.push_back(surface_state(field, lane, conditions).carbon_wt_pct);
  for (std::size_t i = 1; i < profile.depth_m.size(); ++i)
    profile.carbon_wt_pct.push_back(field.carbon_wt_pct(lane, i));
  return profile;
}

std::optional<double> depth_at_carbon_m(const Profile& profile, double limit) {
  const auto& x = profile.depth_m;
  const auto& c = profile.carbon_wt_pct;
  if (c.back() >= limit) return std::nullopt;
  std::size_t i = c.size() - 1;
  while (i > 0 && c[i - 1] < limit) --i;
  if (i == 0) return 0.0;
  // c[i-1] >= limit > c[i].
  const std::size_t first = cubic_first(i, x.size());
  return root_between(&x[first], &c[first], x[i - 1], x[i], [&](double carbon) { return carbon >= limit; });
}

double carbon_at_depth_wt_pct(const Profile& profile, double depth_m) {
  const auto& x = profile.depth_m;
  const auto& c = profile.carbon_wt_pct;
  if (depth_m <= x.front()) return c.front();
  if (depth_m >= x.back()) return c.back();
  const auto i = static_cast<std::size_t>(std::upper_bound(x.begin(), x.end(), depth_m) - x.begin());
  const std::size_t first = cubic_first(i, x.size());
  const auto [least, most] = std::minmax_element(&c[first], &c[first] + 4);
  return std::clamp(cubic_at(&x[first], &c[first], depth_m), *least, *most);
}

std::optional<double> turnover_depth_m(const CarbonField& field, std::size_t lane,
                                       const LaneConditions& conditions) {
  const auto& x = field.mesh->depth_m;
  const Change change = carbon_change(field, lane, conditions);
  const std::vector<double>& rate = change.rate;
  double largest = 0.0;
  for (double r : rate) largest = std::max(largest, std::fabs(r));
  // Far ahead of the front rates are round-off and the tail of the scheme; a sign there means nothing.
  const double no_change = 1e-12 + 1e-5 * largest;
  std::size_t last = 0;
  for (std::size_t i = 0; i + 1 < rate.size(); ++i)
    if (rate[i] < -no_change && rate[i + 1] > no_change) last = i + 1;
  if (last == 0) return std::nullopt;
  // The metal before it must lose in sum: right after a jump single nodes swing.
  if (std::accumulate(change.gain.begin(), change.gain.begin() + static_cast<std::ptrdiff_t>(last), 0.0) >=
      0.0)
    return std::nullopt;
  const std::size_t first = cubic_first(last, x.size());
  return root_between(&x[first], &rate[first], x[last - 1], x[last], [](double r) { return r < 0.0; });
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
