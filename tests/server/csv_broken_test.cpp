// Logger files that do not fit their mapping: refused as a whole, with the line and the reason, and nothing
// of them is in the store afterwards, not even as refused readings. Rules: this project's own; common
// practice, no source.
#include <doctest/doctest.h>

#include "server/api/http_server.h"
#include "server/csv_store_support.h"

using namespace hearthfront::server;
using namespace hearthfront::test;

namespace {

struct Broken {
  std::string name, file, mapping, detail;  // the answer's detail begins so
};

const std::string usual = R"("time_column": "Time", "columns": [{"column": "TC1", "channel": "temperature"},
                                                                 {"column": "CP", "channel": "carbon-potential"}]})";
const std::string good_rows = "2026-03-02 06:05,928.4,1.08\n2026-03-02 06:06,929,1.09\n";

const std::vector<Broken>& files() {
  static const std::vector<Broken> list{
      {"nothing in it", "\r\n \r\n", "{" + usual, "The file is empty."},
      {"a column is missing", "Time,TC2,CP\n" + good_rows, "{" + usual,
       "There is no column \"TC1\" (did you mean \"TC2\"?). The header (line 1) reads: \"Time\", \"TC2\", "
       "\"CP\"."},
      {"a column stands twice", "Time,TC1,TC1,CP\n" + good_rows, "{" + usual,
       "Column \"TC1\" stands twice; name it by number, \"#1\" is the first. The header (line 1) reads"},
      {"the date column is missing", "Time,TC1,CP\n" + good_rows, R"({"date_column": "Date", )" + usual,
       "There is no column \"Date\". The header (line 1) reads"},
      {"a column number beyond the header", "Time,TC1\n" + good_rows,
       R"({"time_column": "Time", "columns": [{"column": "#7", "channel": "temperature"}]})",
       "There is no column #7: the header has 2. The header (line 1) reads"},
      {"another separator", "Time;TC1;CP\n2026-03-02 06:05;928.4;1.08\n", "{" + usual,
       "There is no column \"Time\". There is no column \"TC1\". There is no column \"CP\". The header (line "
       "1) reads: "
       "\"Time;TC1;CP\". The line seems to be separated by \";\", the mapping says \",\"."},
      {"fewer lines than header lines", "Time,TC1,CP\n", R"({"header_lines": 3, )" + usual,
       "The file ends before the header: it has 1 lines, the mapping says header_lines = 3."},
      {"no units line", "Time,TC1,CP\n", R"({"units_line": true, )" + usual,
       "The file ends before the header: it has 1 lines, the mapping says header_lines = 1 and a units "
       "line."},
      {"a unit that no header names", "Time,TC1\n2026-03-02 06:05,928.4\n",
       R"({"time_column": "Time", "columns": [{"column": "TC1", "channel": "temperature", "unit": "from header"}]})",
       "Column \"TC1\": unit = \"from header\", but neither \"TC1\" (line 1) nor a units line names a unit "
       "of a "
       "temperature."},
      {"a quote in the header that is not closed", "Time,\"TC1,CP\n" + good_rows, "{" + usual,
       "The header (line 1): a quote is not closed on this line."},
      {"quotes that are broken in most rows",
       "Time,TC1,CP\n2026-03-02 06:05,928.4,1.08\n2026-03-02 06:06,\"929\"\"x,1.09\n2026-03-02 "
       "06:07,\"930\"x,1.1\n",
       "{" + usual,
       "2 of 3 rows are not divided as the mapping says; the first, line 3: a quote is not closed on this "
       "line"},
      {"decimal commas between commas",
       "Time,TC1,CP\n2026-03-02 06:05,928,4,1,08\n2026-03-02 06:06,929,0,1,09\n", "{" + usual,
       "2 of 2 rows are not divided as the mapping says; the first, line 2: has 5 fields, the header has 3: "
       "a decimal "
       "comma, or a separator inside a text?"},
      {"cells missing between blanks", "Time TC1 CP\n2026-03-02T06:05:00 1.08\n2026-03-02T06:06:00 1.09\n",
       R"({"separator": "spaces", )" + usual,
       "2 of 2 rows are not divided as the mapping says; the first, line 2: has 2 fields, the header has 3: "
       "a cell without "
       "value between blanks?"},
      {"decimal commas read as points",
       "Time;TC1;CP\n2026-03-02 06:05;928,4;1,08\n2026-03-02 06:06;929,0;1,09\n",
       R"({"separator": ";", )" + usual,
       "None of the 2 rows gives a reading; the first fault, line 2: bad number: column \"TC1\": \"928,4\" "
       "is not a number "
       "(the mapping's decimal sign is \".\")"},
      {"times in another format", "Time,TC1,CP\n02.03.2026 06:05,928.4,1.08\n02.03.2026 06:06,929,1.09\n",
       "{" + usual,
       "None of the 2 rows gives a reading; the first fault, line 2: bad time: \"02.03.2026 06:05\": the "
       "date is not written "
       "YYYY-MM-DD"},
      {"day and month mistaken", "Time,TC1,CP\n03/31/2026 06:05,928.4,1.08\n03/31/2026 06:06,929,1.09\n",
       R"({"time_format": "%d/%m/%Y %H:%M", )" + usual,
       "None of the 2 rows gives a reading; the first fault, line 2: bad time: \"03/31/2026 06:05\": there "
       "is no month 31"},
      {"AM and PM missing", "Time,TC1,CP\n03/02/2026 06:05,928.4,1.08\n",
       R"({"time_format": "%m/%d/%Y %I:%M %p", )" + usual,
       "None of the 1 rows gives a reading; the first fault, line 2: bad time: \"03/02/2026 06:05\": "
       "expected \" \" where the "
       "text ends"},
      {"milliseconds taken for seconds", "Time,TC1,CP\n1772431500000,928.4,1.08\n",
       R"({"time_format": "epoch_s", )" + usual,
       "None of the 1 rows gives a reading; the first fault, line 2: bad time: \"1772431500000\": expected "
       "seconds since "
       "1970-01-01 UTC as a plain number; this one is beyond the year 9999: milliseconds instead of "
       "seconds?"},
      {"all in the hour that was not", "Time,TC1,CP\n2026-03-29 02:10,928.4,1.08\n",
       R"({"time_zone": "Europe/Berlin", )" + usual,
       "None of the 1 rows gives a reading; the first fault, line 2: bad time: \"2026-03-29 02:10\": this "
       "time did not exist in "
       "Europe/Berlin: the clocks went forward over it"},
      {"all in the hour that came twice",
       "Time,TC1,CP\n2026-10-25 02:10,928.4,1.08\n2026-10-25 02:20,928.4,1.08\n",
       R"({"time_zone": "Europe/Berlin", )" + usual,
       "None of the 2 rows gives a reading; the first fault, line 2: bad time: \"2026-10-25 02:10\": this "
       "time came twice in "
       "Europe/Berlin when the clocks went back"},
      {"Windows-1252 called UTF-8", "Time,TC1,CP\n2026-03-02 06:05,928.4,\xb0\n",
       R"({"encoding": "utf-8", )" + usual,
       "Line 2: the byte 0xB0 is not UTF-8, the mapping says encoding = \"utf-8\". Is the file "
       "windows-1252?"},
      {"Windows-1252 called ISO-8859-1", "Time,TC1,CP\n2026-03-02 06:05,928.4,\x96\n",
       R"({"encoding": "iso-8859-1", )" + usual,
       "Line 2: the byte 0x96 is a control character in ISO-8859-1: is the file windows-1252?"},
      {"a byte that Windows-1252 does not have", "Time,TC1,CP\n2026-03-02 06:05,928.4,\x81\n",
       R"({"encoding": "windows-1252", )" + usual,
       "Line 2: the byte 0x81 has no meaning in CP1252 here: the file is cut, damaged, or in another "
       "encoding."},
      {"UTF-16 called UTF-8", utf16(u"Time,TC1,CP\n2026-03-02 06:05,928.4,1.08\n", true),
       R"({"encoding": "utf-8", )" + usual,
       "Line 1: the file begins with the byte order mark of UTF-16, the mapping says encoding = \"utf-8\"."},
      {"UTF-16 the other way round", utf16(u"Time,TC1,CP\n2026-03-02 06:05,928.4,1.08\n", true),
       R"({"encoding": "utf-16-be", )" + usual,
       "Line 1: the file begins with the byte order mark of UTF-16 LE, the mapping says encoding = "
       "\"utf-16-be\"."},
      {"UTF-16 without its mark", utf16(u"Time,TC1,CP\n2026-03-02 06:05,928.4,1.08\n", true, false),
       R"({"encoding": "utf-16", )" + usual, "Line 1: the file does not begin with a byte order mark"},
      {"UTF-16 unforeseen", utf16(u"Time,TC1,CP\n2026-03-02 06:05,928.4,1.08\n", true, false), "{" + usual,
       "Line 1: a zero byte: the file is UTF-16 without byte order mark (say utf-16-le or utf-16-be), or not "
       "a text at all."},
      {"UTF-16 cut within a character", utf16(u"Time,TC1,CP\n2026-03-02 06:05,928.4,1.08\n", true) + "x",
       "{" + usual,
       "Line 3: the byte 0x78 has no meaning in UTF-16LE here: the file is cut, damaged, or in another "
       "encoding."},
      {"a workbook instead of a text", std::string("PK\x03\x04\x14\0\x06\0Time,TC1,CP\n", 20), "{" + usual,
       "Line 1: a zero byte: the file is UTF-16 without byte order mark"},
  };
  return list;
}

}  // namespace

TEST_CASE("a file that does not fit is refused whole, with line and reason, and leaves nothing behind") {
  CHECK(files().size() >= 20);
  for (const Broken& broken : files()) {
    CAPTURE(broken.name);
    const LogStore log;
    std::string detail, type;
    try {
      log.upload(broken.file, log.mapping(broken.mapping));
    } catch (const Problem& problem) {
      CHECK(problem.status == 422);
      type = problem.type;
      detail = problem.detail;
    }
    CHECK(type == "bad-csv");
    CHECK(detail.substr(0, broken.detail.size()) == broken.detail);
    CHECK(log.untouched());
  }
}

TEST_CASE("a bad cell or row in a file that fits is refused alone; its neighbours are stored") {
  const LogStore log;
  const CsvReport report = log.upload(
      "Time,TC1,CP\n2026-03-02 06:05,92x,1.08\n2026-03-02 06:06,929,1.09\nyesterday,930,1.1\n"
      "2026-03-02 06:08,\"931,1.11\n2026-03-02 06:09,932,1.12,7\n2026-03-02 06:10,9999,1.13\n",
      log.mapping("{" + usual));
  CHECK(log.stored() ==
        "temperature 2026-03-02T06:06:00Z 929\ncarbon-potential 2026-03-02T06:05:00Z 1.08\n"
        "carbon-potential 2026-03-02T06:06:00Z 1.09\ncarbon-potential 2026-03-02T06:10:00Z 1.13\n");
  std::vector<std::string> told;
  for (const auto& problem : report.problems)
    told.push_back(std::to_string(problem.line) + " " + problem.reason.substr(0, problem.reason.find(':')));
  CHECK(told == std::vector<std::string>{"2 bad number", "4 bad time", "5 broken row", "6 broken row",
                                         "7 out of range"});
  CHECK(report.refused == 6);  // the bad time counts for both cells
}

TEST_CASE("a stretch of a growing file is judged row by row") {
  const LogStore log;
  const CsvReport report = accept_csv(*log.acceptor, "Time,TC1,CP\nyesterday,928.4,1.08\n", log.furnace(),
                                      log.mapping("{" + usual), CsvExtent::part);
  CHECK(report.refused == 2);
  CHECK_THROWS_AS(accept_csv(*log.acceptor, "Time,TC2,CP\n" + good_rows, log.furnace(),
                             log.mapping("{" + usual), CsvExtent::part),
                  Problem);
  CHECK(log.stored().empty());
}
