#include "support/cycles.h"

#include <cmath>
#include <random>
#include <stdexcept>

namespace hearthfront::testing {
namespace {

// Normal deviates from the engine's bits alone: the same on every standard library.
class Noise {
 public:
  explicit Noise(std::uint32_t seed) : engine_(seed) {}
  double operator()() {
    const double u = (static_cast<double>(engine_()) + 0.5) / 4294967296.0;
    const double v = (static_cast<double>(engine_()) + 0.5) / 4294967296.0;
    return std::sqrt(-2.0 * std::log(u)) * std::cos(6.283185307179586 * v);
  }

 private:
  std::mt19937 engine_;
};

}  // namespace

std::vector<solver::IntervalInputs> noisy_eight_hours(std::uint32_t seed, const NoiseLevels& noise) {
  Noise draw(seed);
  std::vector<solver::IntervalInputs> inputs;
  for (int minute = 0; minute < 480; ++minute) {
    double temperature = 930.0, potential = 1.10;
    if (minute < 40) {
      temperature = 850.0 + 80.0 * (minute + 0.5) / 40.0;
      potential = 0.80;
    } else if (minute >= 300) {
      potential = 0.80;
      if (minute >= 420) temperature = minute < 450 ? 930.0 - 70.0 * (minute - 419.5) / 30.0 : 860.0;
    }
    solver::IntervalInputs in;
    in.furnace_temperature_degc = temperature + noise.temperature_k * draw();
    in.load_temperature_degc = temperature + noise.temperature_k * draw();
    in.carbon_potential_wt_pct = potential + noise.carbon_potential_wt_pct * draw();
    inputs.push_back(in);
  }
  return inputs;
}

std::vector<solver::IntervalInputs> constant_inputs(double duration_s, double temperature_degc,
                                                    double carbon_potential_wt_pct, double interval_s) {
  solver::IntervalInputs in;
  in.duration_s = interval_s;
  in.furnace_temperature_degc = temperature_degc;
  in.load_temperature_degc = temperature_degc;
  in.carbon_potential_wt_pct = carbon_potential_wt_pct;
  return std::vector<solver::IntervalInputs>(static_cast<std::size_t>(std::lround(duration_s / interval_s)),
                                             in);
}

std::vector<solver::Steel> case_steels() {
  return {{"16MnCr5", {0.165, 1.15, 0.95, 0.0, 0.0, 0.25}},
          {"20MnCr5", {0.195, 1.25, 1.15, 0.0, 0.0, 0.25}},
          {"18CrNiMo7-6", {0.18, 0.70, 1.65, 1.55, 0.30, 0.25}},
          {"20MoCr4", {0.20, 0.85, 0.45, 0.0, 0.45, 0.25}},
          {"8620", {0.205, 0.80, 0.50, 0.55, 0.20, 0.25}},
          {"9310", {0.105, 0.55, 1.20, 3.25, 0.115, 0.25}},
          {"4320", {0.195, 0.55, 0.50, 1.825, 0.25, 0.25}},
          {"SCM420", {0.205, 0.725, 1.05, 0.0, 0.225, 0.25}}};
}

solver::Steel case_steel(const char* name) {
  for (const solver::Steel& steel : case_steels())
    if (steel.name == name) return steel;
  throw std::invalid_argument(name);
}

solver::Outcome run(const solver::GasCarburizing& model, solver::GasCarburizing::State& state,
                    const std::vector<solver::IntervalInputs>& inputs) {
  solver::GasCarburizing::Workspace workspace(model);
  solver::Outcome worst;
  for (const solver::IntervalInputs& in : inputs) {
    const solver::Outcome outcome = model.advance(state, in, workspace);
    worst.notes |= outcome.notes;
    if (outcome.kind == solver::OutcomeKind::failed) worst.kind = outcome.kind;
    if (worst.kind != solver::OutcomeKind::failed && outcome.kind > worst.kind) worst.kind = outcome.kind;
  }
  return worst;
}

}  // namespace hearthfront::testing
