// A small plant and a noisy run for the tests of server/live. Invented figures.
#pragma once

#include <cmath>
#include <map>
#include <memory>
#include <random>
#include <string>
#include <vector>

#include "server/base/plant.h"
#include "server/live/definition_json.h"
#include "server/live/derive.h"
#include "server/live/result_json.h"

namespace hearthfront::server::test {

inline Plant small_plant() {
  Plant plant;
  plant.name = "Test plant";
  Furnace furnace;
  furnace.id = "f1";
  furnace.name = "Furnace 1";
  furnace.chambers = {{"main", "Main", 1}};
  Channel temperature{"temperature", Role::temperature, Unit::degc, "main", 0, 1100, 60, 300, 600};
  Channel potential{"potential", Role::carbon_potential, Unit::weight_percent, "main", 0, 2, 60, 300, 600};
  furnace.channels = {temperature, potential};
  plant.furnaces.push_back(furnace);
  SteelEntry steel;
  steel.steel = {"20MnCr5", {0.195, 1.25, 1.15, 0, 0, 0.25}};
  plant.steels.push_back(steel);
  return plant;
}

inline std::string load_text(const std::string& extra = "") {
  return R"({"name":"1","furnace":"f1","person":"Test","started_at":"2026-03-02T06:00:00Z",)" + extra +
         R"("charge_temperature_degc":900,
  "recipe":{"name":"r","segments":[
    {"name":"boost","duration_min":120,"temperature_degc":930,"carbon_potential_wt_pct":1.1},
    {"name":"diffuse","duration_min":60,"temperature_degc":930,"carbon_potential_wt_pct":0.8}]},
  "items":[{"name":"A","steel":"20MnCr5","section":{"shape":"plate","thickness_mm":12},"case_depth_window_mm":[0.4,0.8]},
           {"name":"B","steel":"20MnCr5","section":{"shape":"cylinder","diameter_mm":20},
            "criterion":{"kind":"carbon","limit_wt_pct":0.35},"case_depth_window_mm":[0.4,0.8]}]})";
}

inline std::shared_ptr<const LoadDefinition> definition(const std::string& extra = "") {
  const Plant plant = small_plant();
  return std::make_shared<const LoadDefinition>(read_load_body(load_text(extra), plant));
}

using Log = std::map<std::string, std::vector<Sample>>;

// Minute readings with noise over `minutes`, one channel a few seconds after the other; none in [gap_from,
// gap_to) minutes.
inline Log noisy_log(const LoadDefinition& load, int minutes, int gap_from = 0, int gap_to = 0) {
  std::mt19937 random(11);
  std::normal_distribution<double> noise(0, 1);
  Log log;
  for (int m = -10; m <= minutes; ++m) {
    if (m >= gap_from && m < gap_to) continue;
    const std::int64_t t = load.started_us + m * 60'000'000LL;
    log["temperature"].push_back({t + 7'000'000, 930 + 2 * noise(random)});
    log["potential"].push_back({t + 31'000'000, (m < 120 ? 1.1 : 0.8) + 0.01 * noise(random)});
  }
  return log;
}

inline ReadingSource source_of(const Log& log) {
  ReadingSource source;
  source.readings = [&log](const LoadChannels::Used& channel, std::int64_t from, std::int64_t to) {
    std::vector<Sample> samples;
    const auto it = log.find(channel.name);
    if (it == log.end()) return samples;
    for (const Sample& sample : it->second)
      if (sample.time_us >= from && sample.time_us <= to) samples.push_back(sample);
    return samples;
  };
  return source;
}

inline std::string result_of(const LiveLoad& load, const std::shared_ptr<const LoadDefinition>& def) {
  return result_json(read_result(load, def));
}

// As the engine does: the members follow each look, in small slices.
inline void advance(LiveLoad& load, std::int64_t now_us) {
  load.advance_to(now_us);
  while (!load.bring_members_up(7)) {
  }
}

}  // namespace hearthfront::server::test
