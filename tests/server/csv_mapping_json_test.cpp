// Mappings as JSON: what is written reads back as the same, and every fault names its member. Rules: this
// project's own.
#include "server/ingest/csv_mapping_json.h"

#include <doctest/doctest.h>

#include "server/base/file_unit.h"
#include "server/csv_store_support.h"

using namespace hearthfront::server;
using namespace hearthfront::test;

namespace {

// "field: detail" of the problem, or empty.
std::string fault_of(const std::string& json, const std::string& name = "") {
  const Plant plant = plant_with_all_channels();
  try {
    read_csv_mapping_json(json, plant.furnaces[0], name);
  } catch (const Problem& problem) {
    CHECK(problem.type == (problem.status == 400 ? "broken-json" : "invalid-mapping"));
    return problem.field + " | " + problem.detail;
  }
  return {};
}

const std::string rest =
    R"("time_column": "Time", "columns": [{"column": "TC1", "channel": "temperature"}]})";

}  // namespace

TEST_CASE("what is written reads back as the same") {
  const Plant plant = plant_with_all_channels();
  const std::string full =
      R"({"name":"night","encoding":"utf-16-le","separator":"wide_spaces","decimal":",","thousands":".","comment":"//",)"
      R"("header_lines":3,"units_line":true,"time_column":"Zeit","date_column":"#2","time_format":"%d.%m.%y %H:%M",)"
      R"("time_zone":"America/Chicago","utc_offset_min":null,"no_value":["---",""],"columns":[)"
      R"({"column":"TC1 °F","channel":"temperature","unit":"from header","factor":null},)"
      R"({"column":"#5","channel":"co","unit":"ppm","factor":0.5}]})";
  const CsvMapping read = read_csv_mapping_json(full, plant.furnaces[0], "night");
  CHECK(read.separator == ' ');
  CHECK(read.least_blanks == 2);
  CHECK(read.columns[0].unit_from_header);
  CHECK(read.columns[1].unit == FileUnit::ppm);
  CHECK(csv_mapping_json(read) == full);
  const CsvMapping plain = read_csv_mapping_json("{" + rest, plant.furnaces[0], "");
  const CsvMapping usual;
  CHECK(plain.no_value == usual.no_value);
  CHECK(csv_mapping_json(read_csv_mapping_json(csv_mapping_json(plain), plant.furnaces[0], "")) ==
        csv_mapping_json(plain));
}

TEST_CASE("faults name their member") {
  CHECK(fault_of("{" + rest) == "");
  CHECK(fault_of("{") != "");
  CHECK(fault_of("[]").substr(0, 9) == "mapping |");
  CHECK(fault_of(R"({"columns": []})") == "mapping.time_column | mapping.time_column is missing.");
  CHECK(fault_of(R"({"colums": [], )" + rest) ==
        "mapping.colums | mapping.colums is not a member of this object; check the spelling.");
  CHECK(fault_of(R"({"name": "Night", )" + rest) ==
        "mapping.name | mapping.name: may hold only a-z, 0-9 and, inside, - _ . (40 at most).");
  CHECK(fault_of(R"({"name": "night", )" + rest, "day") ==
        "mapping.name | mapping.name: is not the one of the address, \"day\".");
  CHECK(fault_of(R"({"separator": "::", )" + rest).substr(0, 19) == "mapping.separator |");
  CHECK(fault_of(R"({"decimal": ",", )" + rest) ==
        "mapping.decimal | mapping.decimal: separator and decimal sign are the same, so a number cannot be "
        "told from two "
        "columns.");
  CHECK(fault_of(R"({"encoding": "utf8", )" + rest).substr(0, 18) == "mapping.encoding |");
  CHECK(fault_of(R"({"units_line": 1, )" + rest) ==
        "mapping.units_line | mapping.units_line: expected true or false.");
  CHECK(fault_of(R"({"time_zone": "Mars/Olympus", )" + rest).substr(0, 19) == "mapping.time_zone |");
  CHECK(fault_of(R"({"time_format": "%d.%m.%Y", )" + rest) ==
        "mapping.time_format | mapping.time_format: needs either %H or %I for the hour.");
  const auto column = [](const std::string& members) {
    return fault_of(
        R"({"time_column": "Time", "columns": [{"column": "CP", "channel": "carbon-potential"}, {)" +
        members + "}]}");
  };
  CHECK(column(R"("column": "TC1")") ==
        "mapping.columns[1].channel | mapping.columns[1].channel is missing.");
  CHECK(column(R"("column": "TC1", "channel": "temprature")") ==
        "mapping.columns[1].channel | mapping.columns[1].channel: the furnace has no channel \"temprature\" "
        "(did you mean "
        "\"temperature\"?).");
  CHECK(column(R"("column": "TC1", "channel": "temperature", "unit": "mV")") ==
        "mapping.columns[1].unit | mapping.columns[1].unit: temperature is given in \"degC\", \"degF\" or "
        "\"K\", not in "
        "\"mV\".");
  CHECK(column(R"("column": "TC1", "channel": "temperature", "factor": 0)") ==
        "mapping.columns[1].factor | mapping.columns[1].factor: must be a number other than 0.");
  CHECK(column(R"("column": "CP2", "channel": "carbon-potential")") ==
        "mapping.columns[1].channel | mapping.columns[1].channel: \"carbon-potential\" is taken already.");
}

TEST_CASE("units in the words of headers") {
  const auto unit = [](const char* words, Role role) {
    const auto found = unit_in_words(words, role);
    return found ? std::string(text(*found)) : std::string("none");
  };
  CHECK(unit("TC1 [°F]", Role::temperature) == "degF");
  CHECK(unit("temp_C", Role::temperature) == "degC");
  CHECK(unit("Zone 1 deg F actual", Role::temperature) ==
        "none");  // F stands within, so it may mean anything
  CHECK(unit("Zone 1 (degF) actual", Role::temperature) == "degF");
  CHECK(unit("TC type K", Role::temperature) == "none");
  CHECK(unit("C-Pot [% C]", Role::temperature) == "none");
  CHECK(unit("C-Pot [% C]", Role::carbon_potential) == "wt_pct");
  CHECK(unit("EMF (mV)", Role::probe_emf) == "mV");
  CHECK(unit("EMF µV", Role::probe_emf) == "uV");
  CHECK(unit("CO ppm", Role::co) == "ppm");
  CHECK(unit("CO vol%", Role::co) == "vol_pct");
  CHECK(unit("CO", Role::co) == "none");
  // 1 vol% = 10 000 ppm; 273.15 K = 0 degC = 32 degF by definition.
  CHECK(convert(200'000, FileUnit::ppm, Unit::volume_percent) == 20.0);
  CHECK(convert(273.15, FileUnit::kelvin, Unit::degf) == 32.0);
  CHECK(convert(1.1, FileUnit::volt, Unit::millivolt) == doctest::Approx(1100.0));
  CHECK(convert(1100, FileUnit::microvolt, Unit::millivolt) == doctest::Approx(1.1));
}
