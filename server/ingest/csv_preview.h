// What an upload of a logger file would do: its first rows decoded, totals, warnings. Stores nothing. Pure
// but for `judge`; any thread.
#pragma once

#include <cstddef>
#include <cstdint>
#include <functional>
#include <map>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "server/ingest/accept.h"
#include "server/ingest/csv.h"

namespace hearthfront::server {

struct CsvPreview {
  struct Line {
    int line = 0;  // of the file, from 1
    std::string text;
  };
  enum class Use { unused, time, date, channel };
  struct Column {
    std::string column;  // as a mapping would name it: header text or "#3"
    Use use = Use::unused;
    std::string channel;
    std::optional<FileUnit> unit_in_file;
    std::optional<Unit> unit;  // of the channel
  };
  struct Row {
    int line = 0;
    std::vector<std::string> cells;
    std::optional<std::int64_t> time_us;
    std::string local;   // wall clock of the mapping's zone
    std::string reason;  // why the row is refused; else empty
    std::vector<CsvCell> values;
  };
  struct Summary {  // of one column of the mapping
    const Channel* channel = nullptr;
    std::size_t readings = 0, refused = 0, no_value = 0;
    std::optional<double> lowest, highest;  // in the channel's unit
  };
  struct Warning {
    std::string kind, text;
  };

  std::optional<FileFault> fault;  // an upload would be refused as a whole
  Encoding encoding = Encoding::automatic;
  std::vector<Line> raw_lines;             // the first 30
  std::vector<std::string> header, units;  // as everything by columns, of the first 200
  std::vector<Column> columns;
  std::vector<Row> rows;  // the first 30
  int row_count = 0, repeated_headers = 0;
  std::size_t readings = 0, refused = 0, no_value = 0;
  std::map<Refusal, std::size_t> refused_by_reason;
  std::map<std::string, std::size_t> no_value_by_text;
  std::optional<std::int64_t> first_us, last_us;  // earliest and latest instant of a row
  std::optional<double> interval_s;               // median step between rows
  std::vector<Summary> channels;
  std::vector<CsvReport::RowProblem> problems;  // the first 100, one for each line and reason
  std::vector<Warning> warnings;
};

// What would become of one decoded reading; Acceptor::would_be, or nothing to judge by decoding alone.
using Judge = std::function<ReadingOutcome(const RawReading&)>;

// `mapping` is one without mapping_faults.
CsvPreview preview_csv(std::string_view bytes, const Furnace& furnace, const CsvMapping& mapping,
                       const Judge& judge);

}  // namespace hearthfront::server
