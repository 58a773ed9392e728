#include "solver/material/tempering.h"

#include <algorithm>
#include <cmath>

#include "solver/material/constants.h"

namespace hearthfront::solver {

double hollomon_jaffe_parameter(const Tempering& tempering) {
  return (tempering.temperature_degc + zero_celsius_k) * (20.0 + std::log10(tempering.hours));
}

std::optional<TemperingDrop> tempering_drop(const Tempering& tempering, double carbon) {
  const bool known = tempering.temperature_degc >= 150.0 && tempering.temperature_degc <= 204.0 &&
                     tempering.hours >= 0.5 && tempering.hours <= 10.0;
  if (!known) return std::nullopt;
  constexpr double low_carbon = 0.35, low_hv = 15.0, high_carbon = 0.80, high_hv = 50.0;
  constexpr double weak_share = 0.4;  // of a temper at 150 degC for 2 h
  static const double weak = hollomon_jaffe_parameter({150, 2}), usual = hollomon_jaffe_parameter({180, 2});
  const double strength =
      1.0 - (1.0 - weak_share) * (usual - hollomon_jaffe_parameter(tempering)) / (usual - weak);
  const double at_usual =
      low_hv + (high_hv - low_hv) * (std::min(carbon, high_carbon) - low_carbon) / (high_carbon - low_carbon);
  TemperingDrop drop;
  drop.hv = std::max(0.0, strength) * std::max(0.0, at_usual);
  drop.sigma_hv = std::max(10.0, 2.0 / 3.0 * drop.hv);
  return drop;
}

}  // namespace hearthfront::solver
