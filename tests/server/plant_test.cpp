// The plant file: what a good one gives, and the shipped examples. Messages for bad ones:
// plant_faults_test.cpp.
#include "server/base/plant.h"

#include <doctest/doctest.h>

#include <cmath>
#include <stdexcept>

#include "server/settings_support.h"

using namespace hearthfront::server;
using hearthfront::test::joined;
using hearthfront::test::ScratchFolder;

namespace {

const std::string shipped_steels = std::string(HF_SOURCE_DIR) + "/config/steels.toml";

Plant read_good(const std::string& text) {
  const ScratchFolder folder;
  ConfigErrors errors;
  Plant plant = read_plant(folder.write("p.toml", text), shipped_steels, errors);
  CHECK(joined(errors.messages, folder) == "");
  return plant;
}

}  // namespace

TEST_CASE("units: a temperature converts both ways, other units only to themselves") {
  // The scales meet at -40; water freezes at 32 degF and boils at 212 degF (definition of the scale).
  CHECK(convert(-40, Unit::degf, Unit::degc) == doctest::Approx(-40));
  CHECK(convert(32, Unit::degf, Unit::degc) == doctest::Approx(0));
  CHECK(convert(100, Unit::degc, Unit::degf) == doctest::Approx(212));
  CHECK(convert(1706, Unit::degf, Unit::degc) == doctest::Approx(930));
  CHECK(convert(0.8, Unit::weight_percent, Unit::weight_percent) == 0.8);
  CHECK_THROWS_AS(convert(1, Unit::millivolt, Unit::degc), std::logic_error);
}

TEST_CASE("every role and unit has a word that reads back") {
  for (const Role role : {Role::temperature, Role::load_temperature, Role::probe_temperature, Role::probe_emf,
                          Role::carbon_potential, Role::co}) {
    CHECK(role_from(text(role)) == role);
  }
  for (const Unit unit :
       {Unit::degc, Unit::degf, Unit::millivolt, Unit::weight_percent, Unit::volume_percent}) {
    CHECK(unit_from(text(unit)) == unit);
  }
  CHECK(!role_from("Temperature"));
  CHECK(!unit_from("C"));
  CHECK(unit_fits(Role::probe_temperature, Unit::degf));
  CHECK(!unit_fits(Role::carbon_potential, Unit::volume_percent));
}

TEST_CASE("a minimal plant takes the defaults") {
  const Plant plant = read_good(
      "[plant]\nname = \"A\"\n[[furnace]]\nid = \"f\"\n"
      "[[furnace.channel]]\nname = \"t\"\nrole = \"temperature\"\nunit = \"degF\"\n"
      "[[furnace.channel]]\nname = \"e\"\nrole = \"probe_emf\"\nunit = \"mV\"\nexpected_interval_s = 300\n");
  CHECK(!plant.demo);
  const Furnace* furnace = plant.furnace("f");
  REQUIRE(furnace != nullptr);
  CHECK(furnace->name == "f");
  CHECK(furnace->process == "gas carburizing");
  REQUIRE(furnace->chamber("main") != nullptr);
  CHECK(furnace->chamber("main")->name == "Main");
  CHECK(!furnace->beta_m_per_s);
  CHECK(furnace->diffusivity == "agren");

  const Channel* temperature = furnace->channel("t");
  REQUIRE(temperature != nullptr);
  CHECK(temperature->chamber == "main");
  CHECK(temperature->low == doctest::Approx(-4));     // -20 degC
  CHECK(temperature->high == doctest::Approx(2012));  // 1100 degC
  CHECK(temperature->expected_interval_s == 60.0);
  CHECK(temperature->gap_limit_s == 300.0);
  CHECK(temperature->hold_limit_s == 600.0);
  const Channel* emf = furnace->channel("e");
  REQUIRE(emf != nullptr);
  CHECK(emf->gap_limit_s == 1500.0);
  CHECK(emf->hold_limit_s == 1500.0);
  CHECK(plant.furnace("g") == nullptr);
  CHECK(furnace->channel("x") == nullptr);
  CHECK(furnace->csv_mapping("x") == nullptr);
}

TEST_CASE("a full plant keeps what it says") {
  const Plant plant = read_good(R"([plant]
name = "Härterei"
demo = true
[[furnace]]
id = "pit-2"
name = "Pit 2"
process = "gas carburizing"
chambers = [{id = "main", name = "Main"}, {id = "cool"}]
co_fraction = 0.33
h2_fraction = 0.66
beta_m_per_s = 1.25e-7
lag_min = 12.5
diffusivity = "tibbetts"
total_pressure_bar = 1
[[furnace.channel]]
name = "temperature"
role = "temperature"
unit = "degC"
chamber = "main"
low = 0
high = 1050.5
expected_interval_s = 10
gap_limit_s = 60
hold_limit_s = 120
[[furnace.channel]]
name = "cool-temperature"
role = "temperature"
unit = "degC"
chamber = "cool"
[[furnace.csv]]
name = "logger"
separator = ";"
decimal = ","
time_column = "Zeit"
time_format = "%d.%m.%Y %H:%M:%S"
utc_offset_min = 60
header_lines = 2
columns = [{column = "TC1", channel = "temperature", unit = "degF"}, {column = "#4", channel = "cool-temperature"}]
)");
  const Furnace* furnace = plant.furnace("pit-2");
  REQUIRE(furnace != nullptr);
  CHECK(plant.demo);
  CHECK(furnace->chambers.size() == 2);
  CHECK(furnace->chamber("cool")->name == "cool");
  CHECK(furnace->beta_m_per_s == 1.25e-7);
  CHECK(furnace->lag_min == 12.5);
  CHECK(furnace->total_pressure_bar == 1.0);
  CHECK(furnace->channel("temperature")->high == 1050.5);
  CHECK(furnace->channel("temperature")->hold_limit_s == 120.0);
  const CsvMapping* mapping = furnace->csv_mapping("logger");
  REQUIRE(mapping != nullptr);
  CHECK(mapping->separator == ';');
  CHECK(mapping->decimal == ',');
  CHECK(mapping->header_lines == 2);
  CHECK(mapping->utc_offset_min == 60);
  REQUIRE(mapping->columns.size() == 2);
  CHECK(mapping->columns[0].unit == FileUnit::degf);
  CHECK(mapping->columns[1].column == "#4");
  CHECK(!mapping->columns[1].unit);
}

TEST_CASE("the shipped example plant and steel library read without a fault") {
  ConfigErrors errors;
  const Plant plant = read_plant(std::string(HF_SOURCE_DIR) + "/config/plant.toml", shipped_steels, errors);
  CHECK(errors.messages == std::vector<std::string>{});
  CHECK(!plant.demo);
  CHECK(plant.furnaces.size() == 1);
  REQUIRE(plant.steels.size() == 8);
}

TEST_CASE("the shipped steels carry the middle of their standard's range") {
  // Ranges: EN 10084 / ISO 683-3, SAE J404, JIS G 4053 as listed in the library's notes. The alloy factor is
  // Gunnarson 1967 (Haerterei-Techn. Mitt. 22, 293): log k = 0.055 Si - 0.013 Mn - 0.040 Cr + 0.014 Ni -
  // 0.013 Mo; its eight values were calculated apart from this program, so that a slip in one figure shows.
  struct Row {
    const char* id;
    double carbon, alloy_factor;
  };
  const Row rows[] = {{"16MnCr5", 0.165, 0.9137}, {"20MnCr5", 0.195, 0.8943}, {"18CrNiMo7-6", 0.18, 0.9046},
                      {"20MoCr4", 0.20, 0.9525},  {"8620", 0.205, 0.9738},    {"9310", 0.105, 1.0060},
                      {"4320", 0.195, 1.0207},    {"SCM420", 0.205, 0.9108}};
  ConfigErrors errors;
  const Plant plant = read_plant(std::string(HF_SOURCE_DIR) + "/config/plant.toml", shipped_steels, errors);
  for (const Row& row : rows) {
    CAPTURE(row.id);
    const SteelEntry* entry = plant.steel(row.id);
    REQUIRE(entry != nullptr);
    const auto& c = entry->steel.composition;
    CHECK(c.c_wt_pct == row.carbon);
    const double log_k = 0.055 * c.si_wt_pct - 0.013 * c.mn_wt_pct - 0.040 * c.cr_wt_pct +
                         0.014 * c.ni_wt_pct - 0.013 * c.mo_wt_pct;
    CHECK(std::pow(10.0, log_k) == doctest::Approx(row.alloy_factor).epsilon(6e-5));
    CHECK(!entry->standard.empty());
    CHECK(entry->note.find("Ranges: ") == 0);
  }
}
