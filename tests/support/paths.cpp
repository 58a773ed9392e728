#include "support/paths.h"

#include <cmath>
#include <cstddef>

#include "support/cycles.h"

namespace hearthfront::testing {
namespace {

using Inputs = std::vector<solver::IntervalInputs>;

void leave_gas(Inputs& inputs, std::size_t from, std::size_t minutes) {
  for (std::size_t i = from; i < from + minutes; ++i) inputs[i].gas = false;
}

void cool(Inputs& inputs, std::size_t from, std::size_t minutes, double degc) {
  for (std::size_t i = from; i < from + minutes; ++i)
    inputs[i].load_temperature_degc = inputs[i].furnace_temperature_degc = degc;
}

// A carrier gas that wanders by a tenth over two hours.
void measure_gas(Inputs& inputs) {
  for (std::size_t i = 0; i < inputs.size(); ++i) {
    const double wave = std::sin(static_cast<double>(i) / 19.0);
    inputs[i].co_fraction = 0.20 + 0.02 * wave;
    inputs[i].h2_fraction = 0.40 - 0.05 * wave;
  }
}

}  // namespace

std::vector<ProcessPath> process_paths(std::uint32_t seed) {
  const Inputs plain = noisy_eight_hours(seed);
  std::vector<ProcessPath> paths(7);
  for (ProcessPath& path : paths) path.inputs = plain;
  paths[0].name = "boost and diffuse";
  paths[1].name = "film";
  paths[1].film_s = 900;
  paths[2].name = "out of gas twice";
  leave_gas(paths[2].inputs, 150, 30);
  leave_gas(paths[2].inputs, 390, 20);
  paths[3].name = "twice below austenite";
  cool(paths[3].inputs, 100, 30, 700);
  cool(paths[3].inputs, 340, 20, 650);
  paths[4].name = "measured gas";
  measure_gas(paths[4].inputs);
  paths[5].name = "all at once";
  paths[5].film_s = 600;
  leave_gas(paths[5].inputs, 60, 25);
  cool(paths[5].inputs, 170, 40, 680);
  leave_gas(paths[5].inputs, 200, 30);
  measure_gas(paths[5].inputs);
  paths[6].name = "rework";
  paths[6].inputs.resize(260);
  paths[6].rework = noisy_eight_hours(seed + 1);
  paths[6].rework.erase(paths[6].rework.begin() + 60, paths[6].rework.begin() + 260);
  return paths;
}

}  // namespace hearthfront::testing
