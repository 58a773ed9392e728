// Logger files: what is taken. CSV: RFC 4180, and what loggers write: common practice, no source.
#include "server/ingest/csv.h"

#include <doctest/doctest.h>

#include "server/csv_support.h"

using namespace hearthfront::server;
using namespace hearthfront::test;

namespace {

constexpr std::int64_t six_five_us = 1772431500'000'000;  // 2026-03-02T06:05:00Z

}  // namespace

TEST_CASE("a plain file: one reading for each filled cell, in the order of the file") {
  const DecodedCsv csv = decode_csv(
      "Time,TC1,CP\n2026-03-02T06:05:00Z,928.4,1.08\n2026-03-02T06:06:00Z,,1.09\n", furnace(), mapping());
  REQUIRE(!csv.problem);
  CHECK(csv.rows == 2);
  REQUIRE(csv.items.size() == 3);
  CHECK(csv.items[0].furnace == "pit-2");
  CHECK(csv.items[0].channel == "temperature");
  CHECK(csv.items[0].time_us == six_five_us);
  CHECK(csv.items[0].value == 928.4);
  CHECK(csv.items[0].line == 2);
  CHECK(csv.items[1].channel == "carbon-potential");
  CHECK(csv.items[1].value == 1.08);
  CHECK(csv.items[2].channel == "carbon-potential");  // the empty cell is no reading
  CHECK(csv.items[2].line == 3);
  for (const RawReading& item : csv.items) CHECK(item.refusal == Refusal::none);
}

TEST_CASE("semicolons, decimal commas, local times: the common continental file") {
  CsvMapping continental = mapping();
  continental.separator = ';';
  continental.decimal = ',';
  continental.time_format = "%d.%m.%Y %H:%M:%S";
  continental.utc_offset_min = 60;
  CHECK(decoded("Time;TC1;CP\r\n02.03.2026 07:05:00;928,4;1,08\r\n", continental) ==
        "2 temperature 2026-03-02T06:05:00Z 928.4\n2 carbon-potential 2026-03-02T06:05:00Z 1.08\n");
}

TEST_CASE("line ends LF, CRLF and CR, a missing last one, empty lines and a byte order mark are all fine") {
  const std::string expected = "2 temperature 2026-03-02T06:05:00Z 1\n4 temperature 2026-03-02T06:06:00Z 2\n";
  for (const std::string end : {"\n", "\r\n", "\r"}) {
    CAPTURE(end);
    const std::string text =
        "Time,TC1,CP" + end + "2026-03-02T06:05:00Z,1," + end + " \t" + end + "2026-03-02T06:06:00Z,2,";
    CHECK(decoded(text, mapping()) == expected);
    CHECK(decoded(text + end, mapping()) == expected);
    CHECK(decoded("\xef\xbb\xbf" + text, mapping()) == expected);
  }
}

TEST_CASE("quotes: separators and doubled quotes inside, spaces outside") {
  // RFC 4180 section 2, rules 5 to 7.
  CsvMapping quoted = mapping();
  quoted.columns = {{"T, \"zone\" 1", "temperature", {}}};
  CHECK(decoded("\"Time\", \"T, \"\"zone\"\" 1\" \n\"2026-03-02T06:05:00Z\",\"928.4\"\n", quoted) ==
        "2 temperature 2026-03-02T06:05:00Z 928.4\n");
}

TEST_CASE("columns in any order, further columns, spaces around names and values") {
  CHECK(decoded("Note, CP , TC1,Time \nstart of boost, 1.08 ,928.4, 2026-03-02 06:05:00 \n", mapping()) ==
        "2 temperature 2026-03-02T06:05:00Z 928.4\n2 carbon-potential 2026-03-02T06:05:00Z 1.08\n");
}

TEST_CASE("several header lines: the last one names the columns") {
  CsvMapping three = mapping();
  three.header_lines = 3;
  CHECK(decoded("sep=,\nLogger 4711\nTime,TC1,CP\n2026-03-02T06:05:00Z,928.4,\n", three) ==
        "4 temperature 2026-03-02T06:05:00Z 928.4\n");
}

TEST_CASE("columns by number, with and without a header") {
  CsvMapping numbered = mapping();
  numbered.time_column = "#1";
  numbered.columns = {{"#3", "temperature", {}}};
  numbered.header_lines = 0;
  CHECK(decoded("2026-03-02T06:05:00Z,x,928.4,further\n", numbered) ==
        "1 temperature 2026-03-02T06:05:00Z 928.4\n");
  numbered.header_lines = 1;
  CHECK(decoded("T,T,T\n2026-03-02T06:05:00Z,x,928.4\n", numbered) ==
        "2 temperature 2026-03-02T06:05:00Z 928.4\n");
}

TEST_CASE("a column in degF is converted into the channel's degC") {
  CsvMapping fahrenheit = mapping();
  fahrenheit.columns[0].unit = FileUnit::degf;
  // 1706 degF = 930 degC by the definition of the scales.
  CHECK(decoded("Time,TC1,CP\n2026-03-02T06:05:00Z,1706,\n", fahrenheit) ==
        "2 temperature 2026-03-02T06:05:00Z 930\n");
}

TEST_CASE("degree signs in Latin-1 headers and texts are read, in UTF-8 as well") {
  CsvMapping degree = mapping();
  degree.columns = {{"TC1 °C", "temperature", {}}};
  const std::string expected = "2 temperature 2026-03-02T06:05:00Z 928.4\n";
  CHECK(decoded("Time,TC1 \xb0"
                "C,Note\n2026-03-02T06:05:00Z,928.4,H\xe4rten\n",
                degree) == expected);
  CHECK(decoded("Time,TC1 °C,Note\n2026-03-02T06:05:00Z,928.4,Härten\n", degree) == expected);
}

TEST_CASE("read in groups, a file gives the same items as at once, and groups keep their limit") {
  std::string text = "Time,TC1,CP\n";
  for (int minute = 10; minute < 60; ++minute) {
    text += "2026-03-02T06:" + std::to_string(minute) + ":00Z,9" + std::to_string(minute) + ",1.1\n";
  }
  const DecodedCsv whole = decode_csv(text, furnace(), mapping());
  CHECK(whole.items.size() == 100);
  const Furnace pit = furnace();
  const CsvMapping plain = mapping();
  CsvReader reader(text, pit, plain);
  std::vector<RawReading> group, all;
  while (group.clear(), reader.next(group, 7)) {
    CHECK(group.size() <= 7);
    all.insert(all.end(), group.begin(), group.end());
  }
  CHECK(reader.rows() == 50);
  REQUIRE(all.size() == 100);
  for (std::size_t i = 0; i < all.size(); ++i) {
    CHECK(all[i].time_us == whole.items[i].time_us);
    CHECK(all[i].value == whole.items[i].value);
  }
}

TEST_CASE("numbers") {
  struct Row {
    const char* cell;
    char decimal;
    double value;
  };
  const Row rows[] = {{"928.4", '.', 928.4}, {"+1", '.', 1},   {"-0.5", '.', -0.5}, {"928,4", ',', 928.4},
                      {".5", '.', 0.5},      {"5.", '.', 5},   {"1e3", '.', 1000},  {"1,5E-2", ',', 0.015},
                      {"007", '.', 7},       {"0.1", '.', 0.1}};
  for (const Row& row : rows) {
    std::string reason;
    const auto value = parse_decimal(row.cell, row.decimal, reason);
    CHECK(reason == "");
    CHECK(value == row.value);
  }
  for (const char* cell : {"", "-", "+", ".", "e5", "1e", "1e+", "--1", "1 2", "0x10", "nan", "inf",
                           "-Infinity", "1.2.3", "1,234.5", "928.4 C", "1e999", "---", "#N/A"}) {
    std::string reason;
    CHECK(!parse_decimal(cell, '.', reason));
    CHECK(reason != "");
  }
}
