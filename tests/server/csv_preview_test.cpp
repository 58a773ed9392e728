// Preview and proposal of logger files: what is shown, what is warned of, what is said to be unsure. Rules:
// this project's own; common practice, no source.
#include "server/ingest/csv_preview.h"

#include <doctest/doctest.h>

#include <algorithm>

#include "server/csv_store_support.h"
#include "server/ingest/csv_guess.h"

using namespace hearthfront::server;
using namespace hearthfront::test;

namespace {

CsvPreview preview_of(const LogStore& log, const std::string& file, const CsvMapping& mapping) {
  return preview_csv(file, log.furnace(), mapping,
                     [&log](const RawReading& item) { return log.acceptor->would_be(item); });
}

std::string kinds(const CsvPreview& preview) {
  std::string all;
  for (const auto& warning : preview.warnings) all += (all.empty() ? "" : ", ") + warning.kind;
  return all;
}

std::string unsure_fields(const CsvGuess& guess) {
  std::string all;
  for (const Unsure& each : guess.unsure) all += (all.empty() ? "" : ", ") + each.field;
  return all;
}

// Every mark of a guess that a person would change.
CsvGuess guess_of(const std::string& file) {
  const Plant plant = plant_with_all_channels();
  return guess_csv_mapping(file, plant.furnaces[0], DecemberClock().now_us());
}

const std::string temperature_only =
    R"({"time_column": "Time", "columns": [{"column": "TC1", "channel": "temperature"}]})";

}  // namespace

TEST_CASE("a preview shows rows as they would be stored, with totals, and stores nothing") {
  const LogStore log;
  const CsvMapping mapping = log.mapping(
      R"({"separator": ";", "decimal": ",", "time_column": "Zeit", "time_format": "%d.%m.%Y %H:%M", "time_zone": "Europe/Berlin",
          "columns": [{"column": "TC1 °F", "channel": "temperature", "unit": "degF"}, {"column": "CP", "channel": "carbon-potential"}]})");
  const CsvPreview seen =
      preview_of(log,
                 "Zeit;TC1 °F;Note;CP\n02.03.2026 07:05;1706;a;1,08\n02.03.2026 07:06;---;b;9,9\n"
                 "02.03.2026 07:07;;c;1,1\ngestern;1706;d;1,1\n02.03.2026 07:09;1706\n",
                 mapping);
  CHECK(!seen.fault);
  CHECK(seen.header == std::vector<std::string>{"Zeit", "TC1 °F", "Note", "CP"});
  REQUIRE(seen.columns.size() == 4);
  CHECK(seen.columns[0].use == CsvPreview::Use::time);
  CHECK(seen.columns[1].use == CsvPreview::Use::channel);
  CHECK(seen.columns[1].channel == "temperature");
  CHECK(seen.columns[1].unit_in_file == FileUnit::degf);
  CHECK(seen.columns[2].use == CsvPreview::Use::unused);
  REQUIRE(seen.rows.size() == 5);
  CHECK(format_time(seen.rows[0].time_us.value()) == "2026-03-02T06:05:00Z");
  CHECK(seen.rows[0].local == "2026-03-02 07:05:00 CET");
  CHECK(seen.rows[0].values[0].value == 930.0);  // by the definition of the scales
  CHECK(seen.rows[1].values[0].state == CsvCell::State::no_value);
  CHECK(seen.rows[1].values[1].state == CsvCell::State::refused);
  CHECK(seen.rows[1].values[1].reason ==
        "9.9 wt_pct is outside the plausible range 0 to 2 wt_pct of channel \"carbon-potential\"");
  CHECK(seen.rows[2].values[0].state == CsvCell::State::empty);
  CHECK(seen.rows[3].reason == "\"gestern\": expected the day");
  CHECK(seen.rows[4].reason == "has 2 fields, the mapping needs 4.");
  CHECK(seen.row_count == 5);
  CHECK(seen.readings == 3);
  CHECK(seen.refused == 4);
  CHECK(seen.no_value == 1);
  CHECK(seen.refused_by_reason == std::map<Refusal, std::size_t>{{Refusal::broken_row, 1},
                                                                 {Refusal::bad_time, 2},
                                                                 {Refusal::out_of_range, 1}});
  CHECK(format_time(seen.first_us.value()) == "2026-03-02T06:05:00Z");
  CHECK(format_time(seen.last_us.value()) == "2026-03-02T06:07:00Z");
  CHECK(seen.interval_s == 60.0);
  CHECK(seen.channels[0].readings == 1);
  CHECK(seen.channels[1].lowest == 1.08);
  CHECK(seen.channels[1].highest == 1.1);
  CHECK(kinds(seen) == "");
  CHECK(log.untouched());
  // What it foretold is what the upload does.
  const CsvReport report = log.upload(
      "Zeit;TC1 °F;Note;CP\n02.03.2026 07:05;1706;a;1,08\n02.03.2026 07:06;---;b;9,9\n"
      "02.03.2026 07:07;;c;1,1\ngestern;1706;d;1,1\n02.03.2026 07:09;1706\n",
      mapping);
  CHECK(report.stored == seen.readings);
  CHECK(report.refused == seen.refused);
}

TEST_CASE("warnings of a preview") {
  const LogStore log;
  const auto warned = [&log](const std::string& file, const std::string& mapping) {
    return kinds(preview_of(log, file, log.mapping(mapping)));
  };
  CHECK(warned("Time,TC1\n2026-03-02 06:05,928\n2026-03-02 06:04,929\n2026-03-02 06:05,928\n",
               temperature_only) == "times run backward");
  CHECK(warned("Time,TC1\n2026-12-24 06:05,928\n", temperature_only) == "future, no values");
  CHECK(warned("Time,TC1\n2026-03-02 06:05,928\n2026-03-02 07:05,928\n", temperature_only) == "interval");
  CHECK(warned("Time,TC1 °F\n2026-03-02 06:05,928\n",
               R"({"time_column": "Time", "columns": [{"column": "TC1 °F", "channel": "temperature"}]})") ==
        "unit");
  CHECK(warned("Time,TC1,N\n2026-03-02 06:05,928,\xb0\n", temperature_only) == "encoding");
  CHECK(
      warned(
          "Time,TC1\n2026-10-25 01:59,928\n2026-10-25 03:00,929\n",
          R"({"time_column": "Time", "time_zone": "Europe/Berlin", "columns": [{"column": "TC1", "channel": "temperature"}]})") ==
      "clock change, interval");
}

TEST_CASE("a proposal says where it is not sure") {
  CHECK(unsure_fields(
            guess_of("Time,TC1 °C,CP %,EMF mV,CO %\n2026-03-02T06:05:00Z,928.4,1.08,1105,20.1\n")) == "");
  // 2 March or 3 February: nothing in the file tells.
  const CsvGuess day = guess_of("Time,TC1 °C,CP %,EMF mV,CO %\n02/03/2026 06:05,928.4,1.08,1105,20.1\n");
  CHECK(unsure_fields(day) == "time_format, time_zone");
  // Rows of a week tell: they run forward day by day only one way.
  const CsvGuess week = guess_of(
      "Time,TC1 °C,CP %,EMF mV,CO %\n03/02/2026 06:05,928.4,1.08,1105,20.1\n03/03/2026 "
      "06:05,928.4,1.08,1105,20.1\n"
      "03/04/2026 06:05,928.4,1.08,1105,20.1\n03/05/2026 06:05,928.4,1.08,1105,20.1\n");
  CHECK(week.mapping.time_format == "%m/%d/%Y %H:%M");
  CHECK(unsure_fields(week) == "time_zone");
  const CsvGuess grouped = guess_of("Time;EMF mV\n2026-03-02T06:05:00Z;1,105\n2026-03-02T06:06:00Z;1,106\n");
  CHECK(unsure_fields(grouped) == "decimal, columns");
  const CsvGuess warm = guess_of("Time;TC1\n2026-03-02T06:05:00Z;1706\n2026-03-02T06:06:00Z;1707\n");
  REQUIRE(warm.mapping.columns.size() == 1);
  CHECK(warm.mapping.columns[0].unit == FileUnit::degf);  // 1706 lies beyond any furnace in °C
  CHECK(unsure_fields(warm) == "columns[0].unit, columns[0], columns");
  const CsvGuess set =
      guess_of("Time;TC1 setpoint °C;TC1 °C\n2026-03-02T06:05:00Z;930;928\n2026-03-02T06:06:00Z;930;928\n");
  REQUIRE(set.mapping.columns.size() == 1);
  CHECK(set.mapping.columns[0].column == "TC1 °C");
  const CsvGuess prose = guess_of("Dear shift,\nthe pit was hot today.\n");
  CHECK(prose.mapping.time_column == "");
  CHECK(prose.mapping.columns.empty());
  CHECK(unsure_fields(prose) != "");
}

TEST_CASE("a proposal takes the zone of the furnace's other mapping") {
  Plant plant = plant_with_all_channels();
  CsvMapping other;
  other.name = "old";
  other.time_zone = "Europe/Berlin";
  plant.furnaces[0].csv_mappings = {other};
  const CsvGuess guess =
      guess_csv_mapping("Time;TC1 °C\n2026-03-02 06:05;928\n", plant.furnaces[0], DecemberClock().now_us());
  CHECK(guess.mapping.time_zone == "Europe/Berlin");
}

TEST_CASE("whatever is sent, proposal and preview answer") {
  const LogStore log;
  const std::string text =
      "# made up\nTime;TC1 °C;CP %\n02.03.2026 06:05;928,4;1,08\n\"02.03.2026 06:06\";929;---\n02.03.2026 "
      "06:07;930;1,1\n";
  int answered = 0;
  const auto ask = [&](const std::string& bytes) {
    try {
      const CsvGuess guess = guess_csv_mapping(bytes, log.furnace(), log.clock.now_us());
      const CsvPreview seen = preview_of(log, bytes, guess.mapping);
      CHECK(seen.rows.size() <= 30);
      CHECK(mapping_faults(guess.mapping, log.furnace()).empty());
    } catch (const Problem& problem) {
      CHECK(problem.status == 422);
    }
    ++answered;
  };
  for (std::size_t place = 0; place < text.size(); ++place) {
    ask(text.substr(0, place));
    for (const char damage : {'\0', '"', ',', ';', '\n', '\r', '\x80', '\xff', ' ', '9', '#'}) {
      std::string damaged = text;
      damaged[place] = damage;
      ask(damaged);
    }
  }
  ask(std::string(100'000, ';'));
  ask(std::string(100'000, '"'));
  ask(std::string(100'000, '\n') + "x");
  CHECK(answered == static_cast<int>(12 * text.size()) + 3);
  CHECK(log.untouched());
}
