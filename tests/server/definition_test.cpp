// Loads that make no sense are refused, each with its own clear answer that names the member.
#include "server/live/definition_json.h"

#include <doctest/doctest.h>

#include "live_support.h"
#include "server/api/http_server.h"

using namespace hearthfront::server;
using namespace hearthfront::server::test;

namespace {

struct Fault {
  const char* what;
  const char* from;  // replaced in the good body
  const char* to;
  const char* type;
  const char* field;
  const char* says;  // part of the detail
};

std::string replaced(std::string text, const std::string& from, const std::string& to) {
  const auto at = text.find(from);
  REQUIRE(at != std::string::npos);
  return text.replace(at, from.size(), to);
}

}  // namespace

TEST_CASE("each senseless load gets its own answer") {
  const Plant plant = small_plant();
  const Fault faults[] = {
      {"broken JSON", "{\"name\":\"1\"", "{\"name\":\"1", "broken-json", "", ""},
      {"unknown furnace", "\"f1\"", "\"f9\"", "unknown-furnace", "furnace", "f9"},
      {"unknown steel", "\"20MnCr5\"", "\"21MnCr5\"", "unknown-steel", "items[0].steel", "21MnCr5"},
      {"misspelt member", "\"person\"", "\"persn\"", "invalid-load", "person", "missing"},
      {"additional member", "\"name\":\"1\"", "\"name\":\"1\",\"nam\":1", "invalid-load", "nam",
       "not a member"},
      {"repeated member", "\"name\":\"1\"", "\"name\":\"1\",\"name\":\"2\"", "broken-json", "", "twice"},
      {"blank name", "\"name\":\"1\"", "\"name\":\"  \"", "invalid-load", "name", "characters"},
      {"time without zone", "06:00:00Z", "06:00:00", "invalid-load", "started_at", ""},
      {"thirtieth of February", "2026-03-02", "2026-02-30", "invalid-load", "started_at", ""},
      {"number in quotes", "\"charge_temperature_degc\":900", "\"charge_temperature_degc\":\"900\"",
       "invalid-load", "charge_temperature_degc", "number"},
      {"no segments", "\"segments\":[", "\"segments\":[],\"x\":[", "invalid-load", "recipe.segments",
       "1 to 40"},
      {"negative duration", "\"duration_min\":120", "\"duration_min\":-120", "invalid-load",
       "recipe.segments[0].duration_min", "minutes"},
      {"a recipe in Fahrenheit", "\"temperature_degc\":930", "\"temperature_degc\":1706", "invalid-load",
       "recipe.segments[0].temperature_degc", "1150"},
      {"an absurd potential", "\"carbon_potential_wt_pct\":1.1", "\"carbon_potential_wt_pct\":11",
       "invalid-load", "recipe.segments[0].carbon_potential_wt_pct", "wt%"},
      {"unknown shape", "\"plate\"", "\"cube\"", "invalid-load", "items[0].section.shape", "sphere"},
      {"dimension of another shape", "\"thickness_mm\":12", "\"diameter_mm\":12", "invalid-load",
       "items[0].section.thickness_mm", "missing"},
      {"window upside down", "[0.4,0.8]", "[0.8,0.4]", "invalid-load", "items[0].case_depth_window_mm",
       "smaller first"},
      {"window of one number", "[0.4,0.8]", "[0.4]", "invalid-load", "items[0].case_depth_window_mm", "2"},
      {"case deeper than the part", "\"thickness_mm\":12", "\"thickness_mm\":1.5", "invalid-load",
       "items[0].case_depth_window_mm", "deeper than the part"},
      {"core meets the criterion", "\"limit_wt_pct\":0.35", "\"limit_wt_pct\":0.15", "invalid-load",
       "items[1].criterion", "already meets"},
      {"hardness beyond martensite", "\"kind\":\"carbon\",\"limit_wt_pct\":0.35",
       "\"kind\":\"hardness_hrc\",\"limit_hrc\":64.9", "invalid-load", "items[1].criterion",
       "no carbon content"},
      {"two items of one name", "\"name\":\"B\"", "\"name\":\"A\"", "invalid-load", "items[1].name",
       "already called"},
  };
  for (const Fault& fault : faults) {
    CAPTURE(fault.what);
    bool refused = false;
    try {
      read_load_body(replaced(load_text(), fault.from, fault.to), plant);
    } catch (const Problem& problem) {
      refused = true;
      CHECK(problem.type == fault.type);
      CHECK(problem.field == fault.field);
      CHECK(problem.detail.find(fault.says) != std::string::npos);
    }
    CHECK(refused);
  }
}

TEST_CASE("a recipe that never reaches austenite is refused, with the likely cause") {
  const Plant plant = small_plant();
  std::string text = load_text();
  text = replaced(text, "\"temperature_degc\":930", "\"temperature_degc\":500");
  text = replaced(text, "\"temperature_degc\":930", "\"temperature_degc\":500");
  CHECK_THROWS_AS(read_load_body(text, plant), Problem);
}

TEST_CASE("a body nested without end is refused before it can hurt") {
  const std::string deep(100'000, '[');
  CHECK_THROWS_AS(read_load_body(deep, small_plant()), Problem);
  std::string closed = deep + std::string(100'000, ']');
  CHECK_THROWS_AS(read_load_body(closed, small_plant()), Problem);
}

TEST_CASE("defaults are filled in from the plant and kept with the load") {
  const auto def = definition();
  CHECK(def->path.front().chamber == "main");
  CHECK(def->lattice_s == 60);
  CHECK(def->items[0].core_carbon_wt_pct == 0.195);
  CHECK(def->items[0].lag_min == 20);
  CHECK(def->items[0].criterion.text() == "550 HV at 95 % martensite");
  // Hodge & Orehoski's table with ASTM E140: 550 HV at 95 % martensite is 0.400 %C.
  CHECK(def->items[0].criterion.carbon_limit_wt_pct == doctest::Approx(0.400).epsilon(0.002));
}

TEST_CASE("what the first version stored with a load is still read, and runs") {
  const std::string stored = R"({"model_version":"gas-carburizing 1",
    "load":{"name":"2290","furnace":"pit-2","chamber":"main","person":"Day shift","started_at":"2026-03-02T06:00:00Z",
      "ended_at":"2026-03-02T09:00:00Z","charge_temperature_degc":20.0,"lattice_s":60.0,
      "recipe":{"name":"1.1 then 0.8","segments":[
        {"name":"boost","duration_min":120.0,"temperature_degc":930.0,"carbon_potential_wt_pct":1.1},
        {"name":"diffuse","duration_min":60.0,"temperature_degc":930.0,"carbon_potential_wt_pct":0.8}]},
      "items":[{"name":"A","part":"Pinion","quantity":40,
        "steel":{"name":"20MnCr5","composition_wt_pct":{"C":0.195,"Mn":1.25,"Cr":1.15,"Ni":0.0,"Mo":0.0,"Si":0.25}},
        "core_carbon_wt_pct":0.195,"section":{"shape":"plate","thickness_mm":12.0},
        "criterion":{"kind":"hardness_hv","limit_hv":550.0,"martensite_pct":95.0},
        "case_depth_window_mm":[0.4,0.8],"lag_min":20.0}]},
    "furnace":{"id":"pit-2","name":"Pit 2","process":"gas-carburizing","co_fraction":0.2,"h2_fraction":0.4,
      "lag_min":20.0,"total_pressure_bar":1.01325,"diffusivity":"agren","chambers":[{"id":"main","name":"Main"}],
      "channels":[{"name":"temperature","role":"temperature","unit":"degC","chamber":"main","low":0.0,"high":1100.0,
        "expected_interval_s":60.0,"gap_limit_s":300.0,"hold_limit_s":600.0}]}})";
  const auto load = std::make_shared<const LoadDefinition>(read_stored_definition(stored));
  CHECK(load->model_version == "gas-carburizing 1");
  CHECK(load->path == std::vector<PathStep>{{load->started_us, "pit-2", "main"}});
  CHECK(load->first_furnace().chambers.front().places == 1);
  CHECK_FALSE(load->first_furnace().line);
  CHECK(load->recipe.segments[0].ramp_min == 0);
  CHECK_FALSE(load->recipe.segments[0].until.has_value());
  // A later change stores it in the present form, which says the same.
  const auto again = std::make_shared<const LoadDefinition>(read_stored_definition(stored_definition(*load)));
  CHECK(stored_definition(*again) == stored_definition(*load));
  const test::Log nothing;
  const std::string result = test::result_of(*derive(load, test::source_of(nothing), *load->ended_us), load);
  CHECK(test::result_of(*derive(again, test::source_of(nothing), *load->ended_us), again) == result);
}
