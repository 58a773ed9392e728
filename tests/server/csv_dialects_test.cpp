// Habits of loggers on real floors, each imported into a real store with the right instants and values. The
// habits: common practice, no source. Instants of local times were worked out apart from this program, by
// Python's zoneinfo:
//   datetime(2026, 10, 25, 2, 30, tzinfo=ZoneInfo("Europe/Berlin"), fold=0 or 1).astimezone(timezone.utc)
// and for Berlin also by `TZ=Europe/Berlin date -u -d '2026-10-25 02:30:00 CEST'`.
#include <doctest/doctest.h>

#include "server/api/http_server.h"
#include "server/csv_store_support.h"
#include "server/ingest/csv_guess.h"

using namespace hearthfront::server;
using namespace hearthfront::test;

namespace {

struct Dialect {
  std::string name, file, mapping, stored;
  std::size_t no_value = 0, refused = 0;
  bool guessed = true;  // guess_csv_mapping finds the same readings, the time zone being told
};

const std::string two_columns = R"("columns": [{"column": "TC1", "channel": "temperature"},
                                               {"column": "CP", "channel": "carbon-potential"}])";
const std::string usual =
    "temperature 2026-03-02T06:05:00Z 928.4\ntemperature 2026-03-02T06:06:00Z 929\n"
    "carbon-potential 2026-03-02T06:05:00Z 1.08\ncarbon-potential 2026-03-02T06:06:00Z 1.09\n";
const std::string temperatures =
    "temperature 2026-03-02T06:05:00Z 928.4\ntemperature 2026-03-02T06:06:00Z 929\n";

std::vector<Dialect> texts_and_signs() {
  return {
      {"decimal comma and semicolons, local time of Berlin",
       "Zeit;TC1;CP\n02.03.2026 07:05:00;928,4;1,08\n02.03.2026 07:06:00;929,0;1,09\n",
       R"({"separator": ";", "decimal": ",", "time_column": "Zeit", "time_format": "%d.%m.%Y %H:%M:%S",
           "time_zone": "Europe/Berlin", )" +
           two_columns + "}",
       usual},
      {"tabs and CRLF",
       "Time\tTC1\tCP\r\n2026-03-02 06:05:00\t928.4\t1.08\r\n2026-03-02 06:06:00\t929\t1.09\r\n",
       R"({"separator": "\t", "time_column": "Time", )" + two_columns + "}", usual},
      {"line ends of CR alone", "Time,TC1,CP\r2026-03-02 06:05,928.4,1.08\r2026-03-02 06:06,929,1.09\r",
       R"({"time_column": "Time", )" + two_columns + "}", usual},
      {"UTF-16 little-endian with byte order mark",
       utf16(u"Time\tTC1 °C\r\n2026-03-02 06:05\t928.4\r\n2026-03-02 06:06\t929\r\n", true),
       R"({"encoding": "utf-16", "separator": "\t", "time_column": "Time",
           "columns": [{"column": "TC1 °C", "channel": "temperature"}]})",
       temperatures},
      {"UTF-16 big-endian with byte order mark, found by itself",
       utf16(u"Time;TC1 °C\n2026-03-02 06:05;928.4\n2026-03-02 06:06;929\n", false),
       R"({"separator": ";", "time_column": "Time", "columns": [{"column": "TC1 °C", "channel": "temperature"}]})",
       temperatures},
      {"UTF-16 little-endian without mark",
       utf16(u"Time;TC1\n2026-03-02 06:05;928.4\n2026-03-02 06:06;929\n", true, false),
       R"({"encoding": "utf-16-le", "separator": ";", "time_column": "Time",
           "columns": [{"column": "TC1", "channel": "temperature"}]})",
       temperatures},
      {"Windows-1252 with degree sign, dash and euro sign",
       "Time;Zone 1 \x96 TC [\xb0"
       "C];Cost \x80\n2026-03-02 06:05;928.4;1\n2026-03-02 06:06;929;1\n",
       R"({"encoding": "windows-1252", "separator": ";", "time_column": "Time",
           "columns": [{"column": "Zone 1 – TC [°C]", "channel": "temperature", "unit": "from header"}]})",
       temperatures},
      {"ISO-8859-1 with degree sign and umlaut",
       "Uhrzeit;H\xe4rteofen \xb0"
       "C\n2026-03-02 06:05;928,4\n2026-03-02 06:06;929,0\n",
       R"({"encoding": "iso-8859-1", "separator": ";", "decimal": ",", "time_column": "Uhrzeit",
           "columns": [{"column": "Härteofen °C", "channel": "temperature"}]})",
       temperatures, 0, 0, false},  // nothing but the unit speaks for the column
      {"UTF-8 with byte order mark",
       "\xef\xbb\xbf"
       "Time,TC1,CP\n2026-03-02 06:05,928.4,1.08\n2026-03-02 06:06,929,1.09\n",
       R"({"encoding": "utf-8", "time_column": "Time", )" + two_columns + "}", usual},
      {"thousands in groups", "Zeit;TC1;EMF mV\n02.03.2026 06:05;928,4;1.105,5\n02.03.2026 06:06;929;1.106\n",
       R"({"separator": ";", "decimal": ",", "thousands": ".", "time_column": "Zeit", "time_format": "%d.%m.%Y %H:%M",
           "columns": [{"column": "TC1", "channel": "temperature"}, {"column": "EMF mV", "channel": "probe-emf"}]})",
       temperatures + "probe-emf 2026-03-02T06:05:00Z 1105.5\nprobe-emf 2026-03-02T06:06:00Z 1106\n"},
      {"columns aligned by blanks, date and time parted as well",
       "Date        Time      TC1     CP\n2026-03-02  06:05:00  928.4  1.08\n2026-03-02  06:06:00    929  "
       "1.09\n",
       R"({"separator": "spaces", "date_column": "Date", "time_column": "Time", "time_format": "%F %T", )" +
           two_columns + "}",
       usual},
      {"columns aligned by wide blanks, names with a blank",
       "Log time             Furnace temp   Carbon\n2026-03-02 06:05:00        928.4    1.08\n"
       "2026-03-02 06:06:00        929.0    1.09\n",
       R"({"separator": "wide_spaces", "time_column": "Log time",
           "columns": [{"column": "Furnace temp", "channel": "temperature"},
                       {"column": "Carbon", "channel": "carbon-potential"}]})",
       usual},
      {"bars and a line that names the separator",
       "sep=|\nTime|TC1|CP\n2026-03-02T06:05:00Z|928.4|1.08\n2026-03-02T06:06:00Z|929|1.09\n",
       R"({"separator": "|", "header_lines": 2, "time_column": "Time", )" + two_columns + "}", usual},
      {"quoted cells with separators, doubled quotes and line breaks",
       "Time,Note,\"TC1\",CP\n2026-03-02 06:05,\"door open,\nthen \"\"shut\"\"\",928.4,1.08\n"
       "2026-03-02 06:06,\"\",\"929\",1.09\n",
       R"({"time_column": "Time", )" + two_columns + "}", usual},
  };
}

std::vector<Dialect> times_and_units() {
  return {
      {"date and time in two columns",
       "Date;Time;TC1;CP\n02.03.2026;06:05:00;928.4;1.08\n02.03.2026;06:06:00;929;1.09\n",
       R"({"separator": ";", "date_column": "Date", "time_column": "Time", "time_format": "%d.%m.%Y %H:%M:%S", )" +
           two_columns + "}",
       usual},
      {"month first, AM and PM, °F, in Chicago",
       "Time,Furnace °F\n3/2/2026 12:05:00 AM,1706\n3/2/2026 12:06:00 PM,1715\n",
       R"({"time_column": "Time", "time_format": "%m/%d/%Y %I:%M:%S %p", "time_zone": "America/Chicago",
           "columns": [{"column": "Furnace °F", "channel": "temperature", "unit": "from header"}]})",
       // 1706 °F = 930 °C, 1715 °F = 935 °C by the definition of the scales.
       "temperature 2026-03-02T06:05:00Z 930\ntemperature 2026-03-02T18:06:00Z 935\n"},
      {"years of two digits", "Zeit;TC1\n02.03.26 06:05;928,4\n02.03.26 06:06;929,0\n",
       R"({"separator": ";", "decimal": ",", "time_column": "Zeit", "time_format": "%d.%m.%y %H:%M",
           "columns": [{"column": "TC1", "channel": "temperature"}]})",
       temperatures},
      {"months as words", "Time,TC1\n02-Mar-2026 06:05:00,928.4\n02-MAR-2026 06:06:00,929\n",
       R"({"time_column": "Time", "time_format": "%d-%b-%Y %T", "columns": [{"column": "TC1", "channel": "temperature"}]})",
       temperatures},
      {"seconds since 1970", "ts,TC1\n1772431500,928.4\n1772431560.000,929\n",
       R"({"time_column": "ts", "time_format": "epoch_s", "columns": [{"column": "TC1", "channel": "temperature"}]})",
       temperatures},
      {"milliseconds since 1970", "ts,TC1\n1772431500000,928.4\n1772431560000,929\n",
       R"({"time_column": "ts", "time_format": "epoch_ms", "columns": [{"column": "TC1", "channel": "temperature"}]})",
       temperatures},
      // 46083 days from 1899-12-30 to 2026-03-02; 06:05 is 365/1440 of a day.
      {"days of a spreadsheet", "Time;TC1\n46083,2534722222;928,4\n46083,2541666667;929\n",
       R"({"separator": ";", "decimal": ",", "time_column": "Time", "time_format": "serial_day",
           "columns": [{"column": "TC1", "channel": "temperature"}]})",
       temperatures},
      {"a line of units below the names",
       "Time;TC1;CP;EMF\nhh:mm;°F;%;V\n2026-03-02 06:05;1706;1.08;1.1055\n",
       R"({"separator": ";", "units_line": true, "time_column": "Time",
           "columns": [{"column": "TC1", "channel": "temperature", "unit": "from header"},
                       {"column": "CP", "channel": "carbon-potential", "unit": "from header"},
                       {"column": "EMF", "channel": "probe-emf", "unit": "from header"}]})",
       "temperature 2026-03-02T06:05:00Z 930\ncarbon-potential 2026-03-02T06:05:00Z 1.08\n"
       "probe-emf 2026-03-02T06:05:00Z 1105.5\n"},
      {"probe in volts", "Time,Probe emf\n2026-03-02 06:05,1.1055\n2026-03-02 06:06,1.106\n",
       R"({"time_column": "Time", "columns": [{"column": "Probe emf", "channel": "probe-emf", "unit": "V"}]})",
       "probe-emf 2026-03-02T06:05:00Z 1105.5\nprobe-emf 2026-03-02T06:06:00Z 1106\n"},
      {"carbon monoxide in ppm, beside carbon dioxide", "Time,CO2 ppm,CO ppm\n2026-03-02 06:05,3100,201500\n",
       R"({"time_column": "Time", "columns": [{"column": "CO ppm", "channel": "co", "unit": "ppm"}]})",
       "co 2026-03-02T06:05:00Z 20.15\n"},
      {"kelvin, and tenths without a point", "Time,T in K,Carbon x100\n2026-03-02 06:05,295.15,108\n",
       R"({"time_column": "Time", "columns": [{"column": "T in K", "channel": "temperature", "unit": "K"},
           {"column": "Carbon x100", "channel": "carbon-potential", "factor": 0.01}]})",
       "temperature 2026-03-02T06:05:00Z 22\ncarbon-potential 2026-03-02T06:05:00Z 1.08\n", 0, 0, false},
      {"words for no value, over-range among them",
       "Time,TC1,CP\n2026-03-02 06:05,928.4,---\n2026-03-02 06:06,929,NaN\n2026-03-02 "
       "06:07,OVER,\n2026-03-02 06:08,----,n.a.\n",
       R"({"time_column": "Time", )" + two_columns + "}", temperatures, 5},
      {"a word for no value that only this logger has",
       "Time,TC1\n2026-03-02 06:05,928.4\n2026-03-02 06:06,929\n2026-03-02 06:07,offen\n",
       R"({"time_column": "Time", "no_value": ["OFFEN"], "columns": [{"column": "TC1", "channel": "temperature"}]})",
       temperatures, 1, 0, false},
      {"separators at the end of every row",
       "Time;TC1;CP\n2026-03-02 06:05;928.4;1.08;\n2026-03-02 06:06;929;1.09;\n",
       R"({"separator": ";", "time_column": "Time", )" + two_columns + "}", usual},
      {"title and names again after the logger was started anew",
       "Logger 4711\nTime;TC1;CP\n2026-03-02 06:05;928.4;1.08\n\nLogger 4711\nTime;TC1;CP\n2026-03-02 "
       "06:06;929;1.09\n",
       R"({"separator": ";", "header_lines": 2, "time_column": "Time", )" + two_columns + "}", usual},
      {"lines of comment above and among the rows",
       "# Logger 4711\n# zone 1\nTime,TC1,CP\n2026-03-02 06:05,928.4,1.08\n# door open\n2026-03-02 "
       "06:06,929,1.09\n",
       R"({"comment": "#", "time_column": "Time", )" + two_columns + "}", usual},
      {"no names at all", "2026-03-02 06:05;928.4;1.08\n2026-03-02 06:06;929;1.09\n",
       R"({"separator": ";", "header_lines": 0, "time_column": "#1",
           "columns": [{"column": "#2", "channel": "temperature"}, {"column": "#3", "channel": "carbon-potential"}]})",
       usual, 0, 0, false},
      {"names broken over two lines", "Time,\"TC1\n[°C]\"\n2026-03-02 06:05,928.4\n2026-03-02 06:06,929\n",
       R"({"time_column": "Time", "columns": [{"column": "TC1 [°C]", "channel": "temperature"}]})",
       temperatures},
  };
}

std::string local_file(const std::vector<std::string>& times) {
  std::string file = "Time,TC1\n";
  for (std::size_t i = 0; i < times.size(); ++i) file += times[i] + "," + std::to_string(900 + i) + "\n";
  return file;
}

std::string zoned(const std::string& zone) {
  return R"({"time_column": "Time", "time_zone": ")" + zone +
         R"(", "columns": [{"column": "TC1", "channel": "temperature"}]})";
}

std::string instants(const std::vector<std::string>& times) {
  std::string all;
  for (std::size_t i = 0; i < times.size(); ++i)
    if (!times[i].empty()) all += "temperature " + times[i] + " " + std::to_string(900 + i) + "\n";
  return all;
}

std::vector<Dialect> nights() {
  return {
      {"Berlin, clocks go back on 25 October 2026",
       local_file({"2026-10-25 01:30", "2026-10-25 02:00", "2026-10-25 02:30", "2026-10-25 02:00",
                   "2026-10-25 02:30", "2026-10-25 03:00"}),
       zoned("Europe/Berlin"),
       instants({"2026-10-24T23:30:00Z", "2026-10-25T00:00:00Z", "2026-10-25T00:30:00Z",
                 "2026-10-25T01:00:00Z", "2026-10-25T01:30:00Z", "2026-10-25T02:00:00Z"})},
      {"Berlin, the same night by a logger with one row an hour",
       local_file({"2026-10-25 01:00", "2026-10-25 02:00", "2026-10-25 02:00", "2026-10-25 03:00"}),
       zoned("Europe/Berlin"),
       instants(
           {"2026-10-24T23:00:00Z", "2026-10-25T00:00:00Z", "2026-10-25T01:00:00Z", "2026-10-25T02:00:00Z"})},
      {"Berlin, the same night by a file that ends within the second pass",
       local_file({"2026-10-25 02:20", "2026-10-25 02:40", "2026-10-25 02:00", "2026-10-25 02:20"}),
       zoned("Europe/Berlin"),
       instants(
           {"2026-10-25T00:20:00Z", "2026-10-25T00:40:00Z", "2026-10-25T01:00:00Z", "2026-10-25T01:20:00Z"})},
      {"Berlin, clocks go forward on 29 March 2026, one row in the hour that was not",
       local_file({"2026-03-29 01:59", "2026-03-29 02:30", "2026-03-29 03:00"}), zoned("Europe/Berlin"),
       instants({"2026-03-29T00:59:00Z", "", "2026-03-29T01:00:00Z"}), 0, 1},
      {"Chicago, clocks go back on 1 November 2026",
       local_file({"2026-11-01 00:30", "2026-11-01 01:00", "2026-11-01 01:30", "2026-11-01 01:00",
                   "2026-11-01 01:30", "2026-11-01 02:00"}),
       zoned("America/Chicago"),
       instants({"2026-11-01T05:30:00Z", "2026-11-01T06:00:00Z", "2026-11-01T06:30:00Z",
                 "2026-11-01T07:00:00Z", "2026-11-01T07:30:00Z", "2026-11-01T08:00:00Z"})},
      {"Chicago, clocks go forward on 8 March 2026", local_file({"2026-03-08 01:59", "2026-03-08 03:00"}),
       zoned("America/Chicago"), instants({"2026-03-08T07:59:00Z", "2026-03-08T08:00:00Z"})},
      {"times that carry their offset need no zone",
       local_file({"2026-10-25T02:30:00+02:00", "2026-10-25T02:30:00+01:00"}), zoned("Europe/Berlin"),
       instants({"2026-10-25T00:30:00Z", "2026-10-25T01:30:00Z"})},
  };
}

void check_all(const std::vector<Dialect>& dialects) {
  for (const Dialect& dialect : dialects) {
    CAPTURE(dialect.name);
    const LogStore log;
    const CsvMapping mapping = log.mapping(dialect.mapping);
    CsvReport report;
    REQUIRE_NOTHROW(report = log.upload(dialect.file, mapping));
    CHECK(log.stored() == dialect.stored);
    CHECK(report.no_value == dialect.no_value);
    CHECK(report.refused == dialect.refused);
    if (!dialect.guessed) continue;
    const LogStore other;
    CsvGuess guess = guess_csv_mapping(dialect.file, other.furnace(), other.clock.now_us());
    guess.mapping.time_zone = mapping.time_zone;
    CAPTURE(csv_mapping_json(guess.mapping));
    REQUIRE_NOTHROW(other.upload(dialect.file, guess.mapping));
    CHECK(other.stored() == dialect.stored);
  }
}

}  // namespace

TEST_CASE("dialects: texts, separators and signs") {
  check_all(texts_and_signs());
}

TEST_CASE("dialects: times, units, words and lines between") {
  check_all(times_and_units());
}

TEST_CASE("dialects: nights in which the clocks change") {
  check_all(nights());
}

TEST_CASE("the doubled hour is refused where the file does not run forward through it") {
  for (const auto& times :
       std::vector<std::vector<std::string>>{// one pass only: which of the two?
                                             {"2026-10-25 01:59", "2026-10-25 02:30", "2026-10-25 03:00"},
                                             // two rows in the wrong order are no change of the clocks
                                             {"2026-10-25 01:59", "2026-10-25 02:10", "2026-10-25 02:12",
                                              "2026-10-25 02:11", "2026-10-25 02:13", "2026-10-25 03:00"},
                                             // newest first
                                             {"2026-10-25 03:00", "2026-10-25 02:40", "2026-10-25 02:20",
                                              "2026-10-25 02:40", "2026-10-25 02:20", "2026-10-25 01:59"}}) {
    CAPTURE(times.size());
    const LogStore log;
    const CsvReport report = log.upload(local_file(times), log.mapping(zoned("Europe/Berlin")));
    CHECK(report.stored == 2);  // the rows outside of the hour
    CHECK(report.refused == times.size() - 2);
    REQUIRE(!report.problems.empty());
    CHECK(report.problems[0].line == 3);
    CHECK(report.problems[0].reason.find("this time came twice in Europe/Berlin") != std::string::npos);
  }
}
