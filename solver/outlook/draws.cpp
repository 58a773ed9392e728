#include "solver/outlook/draws.h"

#include <algorithm>
#include <array>
#include <cmath>
#include <numbers>
#include <numeric>
#include <stdexcept>

namespace hearthfront::solver {
namespace {

// Small generator with a 64-bit state: G. L. Steele, D. Lea, C. H. Flood, OOPSLA 2014 ("SplitMix"). The
// library's distributions are not the same on every machine, these are.
class Random {
 public:
  explicit Random(std::uint64_t seed) : state_(seed) {}
  std::uint64_t word() {
    std::uint64_t z = (state_ += 0x9e3779b97f4a7c15ULL);
    z = (z ^ (z >> 30)) * 0xbf58476d1ce4e5b9ULL;
    z = (z ^ (z >> 27)) * 0x94d049bb133111ebULL;
    return z ^ (z >> 31);
  }
  // In (0, 1), never an end.
  double uniform() { return (static_cast<double>(word() >> 12) + 0.5) * 0x1p-52; }
  std::size_t below(std::size_t n) { return static_cast<std::size_t>(word() % n); }

 private:
  std::uint64_t state_;
};

// Standard normal quantile by Newton's method on the distribution function.
double normal_quantile(double p) {
  if (p > 0.5) return -normal_quantile(1 - p);
  double z = -std::sqrt(-2 * std::log(2 * p));
  for (int i = 0; i < 60; ++i) {
    const double off = 0.5 * std::erfc(-z / std::numbers::sqrt2) - p;
    const double density = std::exp(-0.5 * z * z) / std::sqrt(2 * std::numbers::pi);
    const double step = off / density;
    z -= std::clamp(step, -1.0, 1.0);
    if (std::fabs(step) < 1e-14 * (1 + std::fabs(z))) break;
  }
  return z;
}

double rectangular(double half_width, double u) {
  return half_width * (2 * u - 1);
}

// Coordinates of the furnace-level draws, the weightiest first: a lattice is best in its first ones.
enum FurnaceDraw : std::size_t {
  draw_beta,
  draw_thermocouple,
  draw_carbon_source,
  draw_diffusivity,
  draw_future_carbon,
  draw_future_temperature,
  draw_gap_carbon,
  draw_gap_temperature,
  draw_load_thermocouple,
  furnace_draws
};
enum ItemDraw : std::size_t {
  draw_position,
  draw_criterion,
  draw_core_carbon,
  draw_lag,
  draw_film,
  item_draws
};
using FurnacePoint = std::array<double, furnace_draws>;  // each in (0, 1)
using ItemPoint = std::array<double, item_draws>;

void set_furnace(const Priors& priors, const FurnacePoint& u, Member& member) {
  member.beta_scale = std::exp(priors.beta_sd_ln * normal_quantile(u[draw_beta]));
  member.diffusivity_scale = std::exp(priors.diffusivity_sd_ln * normal_quantile(u[draw_diffusivity]));
  member.thermocouple_offset_k = rectangular(priors.thermocouple_half_width_k, u[draw_thermocouple]);
  member.load_thermocouple_offset_k =
      rectangular(priors.thermocouple_half_width_k, u[draw_load_thermocouple]);
  member.carbon_source_error = normal_quantile(u[draw_carbon_source]);
  member.temperature_gap_error = normal_quantile(u[draw_gap_temperature]);
  member.carbon_potential_gap_error = normal_quantile(u[draw_gap_carbon]);
  member.future_temperature_error = normal_quantile(u[draw_future_temperature]);
  member.future_carbon_potential_error = normal_quantile(u[draw_future_carbon]);
}

// Returns the offset of the criterion.
double set_item(const Priors& priors, const ItemPriors& item, const ItemPoint& u, Member& member) {
  member.temperature_offset_k = rectangular(priors.uniformity_half_width_k, u[draw_position]);
  member.core_carbon_offset_wt_pct = rectangular(priors.core_carbon_half_width_wt_pct, u[draw_core_carbon]);
  member.lag_scale = std::exp(priors.lag_sd_ln * normal_quantile(u[draw_lag]));
  member.film_scale = std::exp(priors.film_sd_ln * normal_quantile(u[draw_film]));
  return item.hardness_criterion ? priors.criterion_sd_wt_pct * normal_quantile(u[draw_criterion]) : 0.0;
}

// Korobov generators: the least weighted P2 (weights 0.6^j on coordinate j) of all for that size and as many
// coordinates (I. H. Sloan, S. Joe, Lattice Methods for Multiple Integration, 1994, chapter 4; tests search
// again).
std::uint64_t generator_of(std::size_t members) {
  if (members == ensemble_members) return 36;
  if (members == confirming_members) return 391;
  throw std::invalid_argument("an ensemble has " + std::to_string(ensemble_members) + " or " +
                              std::to_string(confirming_members) + " members");
}

std::vector<FurnacePoint> lattice_points(std::size_t members, Random& random) {
  const std::uint64_t generator = generator_of(members);
  FurnacePoint shift;
  for (double& each : shift) each = random.uniform();
  std::vector<FurnacePoint> points(members);
  for (std::size_t m = 0; m < members; ++m) {
    std::uint64_t multiple = m;
    for (std::size_t j = 0; j < furnace_draws; ++j) {
      const double x = static_cast<double>(multiple) / static_cast<double>(members) + shift[j];
      points[m][j] = std::clamp(x - std::floor(x), 1e-9, 1 - 1e-9);
      multiple = multiple * generator % members;
    }
  }
  return points;
}

std::vector<ItemPoint> hypercube_points(std::size_t members, Random& random) {
  std::vector<ItemPoint> points(members);
  std::vector<std::size_t> order(members);
  for (std::size_t j = 0; j < item_draws; ++j) {
    std::iota(order.begin(), order.end(), std::size_t{0});
    for (std::size_t i = members; i > 1; --i) std::swap(order[i - 1], order[random.below(i)]);
    for (std::size_t m = 0; m < members; ++m)
      points[m][j] = (static_cast<double>(order[m]) + random.uniform()) / static_cast<double>(members);
  }
  return points;
}

template <class Point>
Point random_point(Random& random) {
  Point u;
  for (double& each : u) each = random.uniform();
  return u;
}

double growing(double at_one_hour, double bound, double gap_s) {
  return std::min(bound, at_one_hour * std::sqrt(std::max(0.0, gap_s) / 3600.0));
}

}  // namespace

std::vector<ItemDraws> draw_members(const Priors& priors, const std::vector<ItemPriors>& items,
                                    std::uint64_t seed, std::size_t members) {
  Random random(seed);
  const std::vector<FurnacePoint> furnace = lattice_points(members, random);
  std::vector<ItemDraws> draws;
  for (const ItemPriors& item : items) {
    const std::vector<ItemPoint> own = hypercube_points(members, random);
    ItemDraws each{{Member{}}, {0.0}};
    for (std::size_t m = 0; m < members; ++m) {
      Member member;
      set_furnace(priors, furnace[m], member);
      each.criterion_offset_wt_pct.push_back(set_item(priors, item, own[m], member));
      each.lanes.push_back(member);
    }
    draws.push_back(std::move(each));
  }
  return draws;
}

std::vector<TrueMember> draw_truth(const Priors& priors, const std::vector<ItemPriors>& items,
                                   std::uint64_t seed) {
  Random random(seed);
  const auto furnace = random_point<FurnacePoint>(random);
  std::vector<TrueMember> truths;
  for (const ItemPriors& item : items) {
    TrueMember truth;
    set_furnace(priors, furnace, truth.member);
    truth.criterion_offset_wt_pct = set_item(priors, item, random_point<ItemPoint>(random), truth.member);
    truths.push_back(truth);
  }
  return truths;
}

double temperature_gap_sd_k(double gap_s) {
  return growing(5.0, 15.0, gap_s);
}

double carbon_potential_gap_sd_wt_pct(double gap_s) {
  return growing(0.04, 0.12, gap_s);
}

}  // namespace hearthfront::solver
