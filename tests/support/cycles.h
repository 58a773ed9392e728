// Carburizing cycles as a logger would deliver them, for tests and benchmarks. The data are invented: set
// points of an ordinary boost-diffuse cycle with seeded noise of the size a controller leaves (1 K and
// 0.01 wt%, common practice, no source).
#pragma once

#include <cstdint>
#include <vector>

#include "solver/solver.h"

namespace hearthfront::testing {

struct NoiseLevels {
  double temperature_k = 1.0;
  double carbon_potential_wt_pct = 0.01;
};

// 8 h in minutes: heating 850 -> 930 degC in 40 min at Cp 0.8, boost at 1.10 for 4 h 20 min, diffuse at
// 0.80 for 2 h, down to 860 degC in 30 min and 30 min there. All of it in austenite.
std::vector<solver::IntervalInputs> noisy_eight_hours(std::uint32_t seed, const NoiseLevels& noise = {});

// Constant inputs for so long, in intervals of `interval_s`.
std::vector<solver::IntervalInputs> constant_inputs(double duration_s, double temperature_degc,
                                                    double carbon_potential_wt_pct, double interval_s = 60);

// Case-hardening steels, middle of the ranges of EN 10084 / ISO 683-3, SAE J404 and JIS G 4053.
std::vector<solver::Steel> case_steels();
solver::Steel case_steel(const char* name);

// Advances through all inputs; returns the worst outcome (failed over outside_range over notes).
solver::Outcome run(const solver::GasCarburizing& model, solver::GasCarburizing::State& state,
                    const std::vector<solver::IntervalInputs>& inputs);

}  // namespace hearthfront::testing
