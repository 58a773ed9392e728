// What bands and the outlook cost: a shop of 100 furnaces with 300 items, each minute of data brings the
// nominal parts and 127 members forward and works out every outlook anew; the share of one core that takes,
// as the mean over the cycle, against the 8 % that is asked. And the restart with 100 loads that have run ten
// hours: how long until all depths, and until all bands and outlooks stand, on one thread. And what a trial
// and a proposal for five items take. Invented loads. Run alone: it measures processor time of its own
// thread.
#include <algorithm>
#include <chrono>
#include <cmath>
#include <cstdio>
#include <memory>
#include <string>
#include <vector>

#include "server/live/definition_json.h"
#include "server/live/derive.h"
#include "server/live/proposal.h"
#include "server/live/view.h"
#include "support/cpu_time.h"

namespace {

using namespace hearthfront;
using namespace hearthfront::server;
using hearthfront::testing::thread_seconds;

constexpr std::int64_t minute = 60'000'000;

Plant plant() {
  Plant plant;
  plant.name = "Invented";
  Furnace furnace;
  furnace.id = "f";
  furnace.name = "F";
  furnace.chambers = {{"main", "Main", 1}};
  furnace.channels = {
      {"temperature", Role::temperature, Unit::degc, "main", 0, 1100, 60, 300, 600},
      {"potential", Role::carbon_potential, Unit::weight_percent, "main", 0, 2, 60, 300, 600}};
  plant.furnaces.push_back(furnace);
  plant.steels.push_back({{"20MnCr5", {0.195, 1.25, 1.15, 0, 0, 0.25}}, "", "", ""});
  plant.steels.push_back({{"18CrNiMo7-6", {0.18, 0.7, 1.65, 1.55, 0.3, 0.25}}, "", "", ""});
  return plant;
}

std::shared_ptr<const LoadDefinition> load(int number, int items, int boost_min, int diffuse_min) {
  const char* shapes[] = {R"({"shape":"plate","thickness_mm":12})",
                          R"({"shape":"cylinder","diameter_mm":30})",
                          R"({"shape":"bore","bore_diameter_mm":40,"wall_mm":9})"};
  std::string text =
      R"({"name":")" + std::to_string(number) +
      R"(","furnace":"f","person":"Bench","started_at":"2026-03-02T06:00:00Z","recipe":{"name":"r",
    "segments":[{"name":"heat","duration_min":60,"temperature_degc":930,"carbon_potential_wt_pct":0.6},
    {"name":"boost","duration_min":)" +
      std::to_string(boost_min) + R"(,"temperature_degc":930,"carbon_potential_wt_pct":1.1},
    {"name":"diffuse","duration_min":)" +
      std::to_string(diffuse_min) + R"(,"temperature_degc":930,"carbon_potential_wt_pct":0.8},
    {"name":"equalize","duration_min":30,"temperature_degc":850,"carbon_potential_wt_pct":0.8}]},"items":[)";
  for (int i = 0; i < items; ++i)
    text += std::string(i ? "," : "") + R"({"name":"I)" + std::to_string(i) + R"(","steel":")" +
            (i % 2 ? "18CrNiMo7-6" : "20MnCr5") + R"(","section":)" + shapes[i % 3] +
            R"(,"case_depth_window_mm":[1.0,1.45],"surface_carbon_window_wt_pct":[0.65,0.95]})";
  return std::make_shared<const LoadDefinition>(read_load_body(text + "]}", plant()));
}

double noise(int m, int salt) {
  return std::sin(12.9898 * m + 78.233 * salt) * 2.0 + std::sin(0.7 * m + salt);
}

// Minute readings as the recipe asks, with noise.
void feed(LiveLoad& live, int minutes, int salt) {
  const LoadDefinition& def = live.definition();
  std::vector<Sample> temperature, potential;
  for (int m = -5; m <= minutes; ++m) {
    double left = m, set_degc = 0, set_wt_pct = 0;
    for (const Segment& segment : def.recipe.segments) {
      set_degc = segment.temperature_degc;
      set_wt_pct = segment.carbon_potential_wt_pct;
      if ((left -= segment.duration_min) < 0) break;
    }
    temperature.push_back({def.started_us + m * minute, set_degc + noise(m, salt)});
    potential.push_back({def.started_us + m * minute + 7'000'000, set_wt_pct + 0.006 * noise(m, salt + 1)});
  }
  for (std::size_t used = 0; used < live.channels().used().size(); ++used)
    live.replace_readings(used, def.started_us - 10 * minute, def.started_us + minutes * minute + minute,
                          live.channels().used()[used].role == Role::temperature ? temperature : potential);
}

struct Shop {
  std::vector<std::shared_ptr<const LoadDefinition>> definitions;
  std::vector<std::unique_ptr<LiveLoad>> loads;
};

Shop shop(int loads, int items, int minutes, int boost_min, int diffuse_min) {
  Shop shop;
  for (int i = 0; i < loads; ++i) {
    shop.definitions.push_back(load(i, items, boost_min, diffuse_min));
    shop.loads.push_back(std::make_unique<LiveLoad>(shop.definitions.back()));
    feed(*shop.loads.back(), minutes, i);
  }
  return shop;
}

void view_of(LiveLoad& load, const std::shared_ptr<const LoadDefinition>& definition, std::int64_t now_us) {
  LoadView view = make_view(load, definition, now_us, 300);
  add_outlook(view, load, 1, {});
}

void bench_minute() {
  // A tenth of the shop, looked at in every twelfth minute of an eight-hour cycle: the mean is the same.
  constexpr int loads = 10, items = 3, minutes = 480, each = 12, furnaces = 100;
  Shop shop = ::shop(loads, items, minutes, 270, 120);
  double run_s = 0, members_s = 0, view_s = 0, slowest_s = 0;
  int minutes_done = 0;
  for (int m = 1; m < minutes; ++m) {
    const bool looked = m % each == 0;
    for (int i = 0; i < loads; ++i) {
      LiveLoad& live = *shop.loads[static_cast<std::size_t>(i)];
      const std::int64_t now = live.definition().started_us + m * minute + 20'000'000;
      const double t0 = thread_seconds();
      live.advance_to(now);
      const double t1 = thread_seconds();
      live.bring_members_up();
      const double t2 = thread_seconds();
      if (!looked) continue;
      view_of(live, shop.definitions[static_cast<std::size_t>(i)], now);
      const double t3 = thread_seconds();
      run_s += t1 - t0;
      members_s += t2 - t1;
      view_s += t3 - t2;
      slowest_s = std::max(slowest_s, t3 - t0);
    }
    minutes_done += looked;
  }
  const double per_load = (run_s + members_s + view_s) / (loads * minutes_done);
  std::printf(
      "A minute of one load of %d items, mean over an 8 h cycle: nominal parts %.2f ms, %zu members %.2f ms, "
      "view and "
      "outlook %.2f ms; slowest %.1f ms\n",
      items, 1e3 * run_s / (loads * minutes_done), solver::ensemble_members,
      1e3 * members_s / (loads * minutes_done), 1e3 * view_s / (loads * minutes_done), 1e3 * slowest_s);
  const double share = per_load * furnaces / 60;
  std::printf(
      "%d furnaces, %d items, outlook each minute: %.2f %% of one core (asked: 8 %%; ratio %.2f), all of "
      "them in "
      "%.2f s (snapshot lag asked: 2 s)\n",
      furnaces, furnaces * items, 100 * share, share / 0.08, per_load * furnaces);
}

void bench_restart() {
  constexpr int loads = 100, items = 3, minutes = 600;
  Shop shop = ::shop(loads, items, minutes, 420, 180);
  const double t0 = thread_seconds();
  for (auto& live : shop.loads) live->advance_to(live->definition().started_us + minutes * minute);
  const double t1 = thread_seconds();
  for (std::size_t i = 0; i < shop.loads.size(); ++i) {
    shop.loads[i]->bring_members_up();
    view_of(*shop.loads[i], shop.definitions[i], shop.loads[i]->state_us());
  }
  const double t2 = thread_seconds();
  std::printf(
      "Restart, %d loads of 10 h, %d items: depths after %.2f s (asked: 3 s), bands and outlooks after %.2f "
      "s (asked: "
      "10 s), on one thread, without reading the database\n",
      loads, loads * items, t1 - t0, t2 - t0);
}

void bench_proposal() {
  Shop shop = ::shop(1, 5, 240, 270, 120);
  LiveLoad& live = *shop.loads.front();
  live.advance_to(live.definition().started_us + 240 * minute);
  live.bring_members_up();
  const OutlookStart start = outlook_start(live, shop.definitions.front());
  const double t0 = thread_seconds();
  const auto trial = make_outlook(*start.base, start.base->rest, {});
  const double t1 = thread_seconds();
  std::printf("Five items, mid-cycle: a trial takes %.0f ms (asked: 1 s), joint chance %.2f\n",
              1e3 * (t1 - t0), trial->ahead.end.joint_chance);
  for (const double asked : {0.7, 0.9, 0.98}) {
    const double t2 = thread_seconds();
    const Proposal proposal = propose(*start.base, {asked, {}});
    std::printf("  a proposal for %.2f takes %.0f ms (asked: 1 s): %s\n", asked,
                1e3 * (thread_seconds() - t2),
                (proposal.found ? proposal.sentence : proposal.reason).c_str());
  }
}

}  // namespace

int main() {
  std::printf("kernel %s\n", solver::kernel_name(solver::kernel_choice()));
  bench_minute();
  bench_restart();
  bench_proposal();
}
