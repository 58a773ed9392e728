// Decodes a logger file: CSV text by the mapping of the plant file (separator, decimal sign, time format,
// columns, units). Takes LF, CRLF or CR line ends, a UTF-8 byte order mark, RFC 4180 quotes within a line,
// and Latin-1 where the text is not UTF-8 (degree signs). One thread; memory bounded by what next() is
// asked for. An empty cell is no reading; every other cell becomes one item, good or refused.
#pragma once

#include <cstddef>
#include <cstdint>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "server/api/http_server.h"
#include "server/base/plant.h"
#include "server/ingest/raw_reading.h"

namespace hearthfront::server {

class CsvReader {
 public:
  // All three must outlive the reader. Reads the header lines; see problem().
  CsvReader(std::string_view text, const Furnace& furnace, const CsvMapping& mapping);

  // Why the file as a whole cannot be read: a missing column, a wrong separator, UTF-16, no rows.
  const std::optional<Problem>& problem() const { return problem_; }

  // Appends the items of further rows, whole rows as long as `at_most` items may not be exceeded (one row
  // at least). False at the end of the text with nothing appended.
  bool next(std::vector<RawReading>& items, std::size_t at_most);

  int rows() const { return rows_; }  // data rows so far, empty lines not counted

 private:
  struct Source {  // where one column of the mapping is found in the file
    std::size_t index = 0;
    const CsvColumn* column = nullptr;
    const Channel* channel = nullptr;
  };
  struct RowTime {
    std::optional<std::int64_t> time_us;
    std::string reason;
  };

  void fail(std::string detail);
  bool take_line(std::string_view& line);
  bool split(std::string_view line, std::vector<std::string>& fields) const;  // false: quote not closed
  void read_header();
  void locate_columns(const std::vector<std::string>& header, const std::string& header_line);
  void read_row(std::string_view line, std::vector<RawReading>& items);
  void read_cell(const Source& source, const RowTime& time, std::vector<RawReading>& items) const;
  void add_broken(std::string detail, std::vector<RawReading>& items) const;

  std::string_view text_;
  const Furnace& furnace_;
  const CsvMapping& mapping_;
  std::size_t position_ = 0;
  int line_ = 0, rows_ = 0;
  std::size_t time_index_ = 0, header_fields_ = 0;  // header_fields_ 0: no header
  std::vector<Source> sources_;
  std::vector<std::string> fields_;  // of the current row, kept for its memory
  std::optional<Problem> problem_;
};

struct DecodedCsv {
  std::vector<RawReading> items;
  int rows = 0;
  std::optional<Problem> problem;
};

// The whole file at once, for replay.
DecodedCsv decode_csv(std::string_view text, const Furnace& furnace, const CsvMapping& mapping);

// A cell as a number: optional sign, digits, the mapping's decimal sign, optional exponent, nothing else.
// Empty with `reason` otherwise.
std::optional<double> parse_decimal(std::string_view cell, char decimal, std::string& reason);

}  // namespace hearthfront::server
