// The likeliest faults of logger files, each with its exact answer. Common practice, no source.
#include <doctest/doctest.h>

#include "server/csv_support.h"

using namespace hearthfront::server;
using namespace hearthfront::test;

namespace {

struct Fault {
  std::string text, answer;
};

const std::string header = "Time,TC1,CP\n";

}  // namespace

TEST_CASE("a file that does not fit its mapping is refused as a whole") {
  const Fault faults[] = {
      {"", "422 bad-csv: The file is empty."},
      {"\r\n \r\n", "422 bad-csv: The file is empty."},
      {std::string("\xff\xfeT\0i", 5),
       "422 bad-csv: Line 1: the byte 0x69 has no meaning in UTF-16LE here: the file is cut, damaged, or in "
       "another "
       "encoding."},
      {std::string("Time,\0TC1", 9),
       "422 bad-csv: Line 1: a zero byte: the file is UTF-16 without byte order mark (say utf-16-le or "
       "utf-16-be), or "
       "not a text at all."},
      {"Time,TC2,CP\n",
       "422 bad-csv: There is no column \"TC1\" (did you mean \"TC2\"?). The header (line 1) reads: "
       "\"Time\", "
       "\"TC2\", \"CP\"."},
      {"time,TC1,CP\n",
       "422 bad-csv: There is no column \"Time\" (did you mean \"time\"?). The header (line 1) reads: "
       "\"time\", "
       "\"TC1\", \"CP\"."},
      {"Time;TC1;CP\n",
       "422 bad-csv: There is no column \"Time\". There is no column \"TC1\". There is no column \"CP\". The "
       "header "
       "(line 1) reads: \"Time;TC1;CP\". The line seems to be separated by \";\", the mapping says \",\"."},
      {"Time\tTC1\tCP\n",
       "422 bad-csv: There is no column \"Time\". There is no column \"TC1\". There is no column \"CP\". The "
       "header "
       "(line 1) reads: \"Time TC1 CP\". The line seems to be separated by tab, the mapping says \",\"."},
      {"Time,TC1,TC1,CP\n",
       "422 bad-csv: Column \"TC1\" stands twice; name it by number, \"#1\" is the first. The header (line "
       "1) reads: "
       "\"Time\", \"TC1\", \"TC1\", \"CP\"."},
      {"Time,\"TC1,CP\n", "422 bad-csv: The header (line 1): a quote is not closed on this line."},
      {"2026-03-02T06:05:00Z,928.4,1.08\n",
       "422 bad-csv: There is no column \"Time\". There is no column \"TC1\". There is no column \"CP\". The "
       "header "
       "(line 1) reads: \"2026-03-02T06:05:00Z\", \"928.4\", \"1.08\"."},
  };
  for (const Fault& fault : faults) {
    CAPTURE(fault.text);
    CHECK(decoded(fault.text, mapping()) == fault.answer);
  }
  CsvMapping three = mapping();
  three.header_lines = 3;
  CHECK(decoded(header, three) ==
        "422 bad-csv: The file ends before the header: it has 1 lines, the mapping says header_lines = 3.");
  CsvMapping ninth = mapping();
  ninth.columns[0].column = "#9";
  CHECK(decoded(header, ninth) ==
        "422 bad-csv: There is no column #9: the header has 3. The header (line 1) reads: \"Time\", \"TC1\", "
        "\"CP\".");
}

TEST_CASE("a header without rows is no fault") {
  CHECK(decoded(header, mapping()) == "");
}

TEST_CASE("a bad row or cell is told with its line; the others are taken") {
  const std::string good = "2026-03-02T06:06:00Z,929,\n";
  const std::string taken = "3 temperature 2026-03-02T06:06:00Z 929\n";
  const Fault faults[] = {
      {"2026-03-02T06:05:00Z,\"928.4,1.08\n", "2  broken row: a quote is not closed on this line\n"},
      {"2026-03-02T06:05:00Z,\"928\"4,1.08\n", "2  broken row: text follows a closing quote\n"},
      {"2026-03-02T06:05:00Z,928,4,1.08\n",
       "2  broken row: has 4 fields, the header has 3: a decimal comma, or a separator inside a text?\n"},
      {"2026-03-02T06:05:00Z,928\n", "2  broken row: has 2 fields, the mapping needs 3.\n"},
      {"2026-03-02T06:05:00Z;928.4;1.08\n",
       "2  broken row: has 1 fields, the mapping needs 3. The line seems to be separated by \";\", the "
       "mapping says "
       "\",\".\n"},
      {"2026-03-02T06:05:00Z,928.4,1.08,,\n",
       "2 temperature 2026-03-02T06:05:00Z 928.4\n2 carbon-potential 2026-03-02T06:05:00Z 1.08\n"},
      {"02.03.2026 06:05,928.4,1.08\n",
       "2 temperature bad time: \"02.03.2026 06:05\": the date is not written YYYY-MM-DD\n"
       "2 carbon-potential bad time: \"02.03.2026 06:05\": the date is not written YYYY-MM-DD\n"},
      {"2026-02-30T06:05:00Z,928.4,\n",
       "2 temperature bad time: \"2026-02-30T06:05:00Z\": month 2 of 2026 has no day 30\n"},
      {",928.4,\n", "2 temperature bad time: \"\": the time is empty\n"},
      {"2026-03-02T06:05:00Z,\"928,4\",\n",
       "2 temperature bad number: column \"TC1\": \"928,4\" is not a number (the mapping's decimal sign is "
       "\".\")\n"},
      {"2026-03-02T06:05:00Z,inf,1.08\n",
       "2 temperature bad number: column \"TC1\": \"inf\" is not a number\n"
       "2 carbon-potential 2026-03-02T06:05:00Z 1.08\n"},
      {"2026-03-02T06:05:00Z,1e999,\n",
       "2 temperature bad number: column \"TC1\": \"1e999\" is beyond what a 64-bit floating point number "
       "can hold\n"},
      {"2026-03-02T06:05:00Z,928.4 \xb0"
       "C,\n",
       "2 temperature bad number: column \"TC1\": \"928.4 °C\" is not a number\n"},
  };
  for (const Fault& fault : faults) {
    CAPTURE(fault.text);
    CHECK(decoded(header + fault.text + good, mapping()) == fault.answer + taken);
  }
}

TEST_CASE("a refused cell keeps the texts of the file, in UTF-8 and cut") {
  const DecodedCsv csv = decode_csv(header + "now," + std::string(300, '\xb0') + ",\n", furnace(), mapping());
  REQUIRE(csv.items.size() == 1);
  CHECK(csv.items[0].time_text == "now");
  CHECK(csv.items[0].value_text.size() == 200);
  CHECK(csv.items[0].value_text.substr(0, 2) == "°");
}

TEST_CASE("every cut and every damaged byte of a file is answered, never thrown") {
  const std::string text = header + "2026-03-02T06:05:00Z,928.4,1.08\n\"2026-03-02T06:06:00Z\",929,\n";
  const Furnace pit = furnace();
  const CsvMapping plain = mapping();
  for (std::size_t place = 0; place < text.size(); ++place) {
    const DecodedCsv cut = decode_csv(std::string_view(text).substr(0, place), pit, plain);
    CHECK(cut.items.size() <= 3);
    for (const char damage : {'\0', '"', ',', ';', '\n', '\r', '\x80', '\xff', '-', 'e'}) {
      std::string damaged = text;
      damaged[place] = damage;
      CHECK(decode_csv(damaged, pit, plain).items.size() <= 4);
    }
  }
}
