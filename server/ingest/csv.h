// Decodes a logger file by a mapping (server/base/csv_mapping.h): rows with their instants, cells with their
// values in the channels' units. An empty cell is no reading, a word that means "no value" is counted as
// such; every other cell becomes one reading, good or refused on its own: a bad cell does not spoil the
// others of its row. A row with a wrong number of fields or a time that cannot be read is refused whole.
// Lines that repeat a header line (a logger that started again) are skipped and counted. One thread; memory
// bounded by the text and by what next() is asked for.
#pragma once

#include <cstddef>
#include <cstdint>
#include <map>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "server/api/http_server.h"
#include "server/base/plant.h"
#include "server/ingest/csv_number.h"
#include "server/ingest/csv_text.h"
#include "server/ingest/csv_times.h"
#include "server/ingest/raw_reading.h"

namespace hearthfront::server {

struct CsvCell {
  enum class State { value, empty, no_value, refused };
  State state = State::empty;
  double value = 0;    // in the channel's unit
  std::string reason;  // where refused
};

struct CsvRow {
  int line = 0;
  std::vector<std::string> fields;      // as they came
  std::string time_text;                // date and time as they were read
  std::optional<std::int64_t> time_us;  // empty: the row is refused
  Refusal refusal = Refusal::none;      // of the row: broken_row or bad_time
  std::string reason;
  std::vector<CsvCell> cells;  // one for each column of the mapping; none where the row is broken
};

// What the rows read so far came to. A row refused for its time counts each of its filled cells.
struct CsvTally {
  int rows = 0, broken_rows = 0, repeated_headers = 0;  // empty lines are no rows
  std::size_t readings = 0, refused = 0, no_value = 0;
  std::map<std::string, std::size_t> no_value_by_text;
  std::map<Refusal, std::size_t> refused_by_reason;
  int first_refused_line = 0, first_broken_line = 0;
  std::string first_refused, first_broken;
};

class CsvReader {
 public:
  // One column of the mapping, found in the file.
  struct Source {
    std::size_t index = 0;  // of the field
    const CsvColumn* column = nullptr;
    const Channel* channel = nullptr;
    FileUnit unit = FileUnit::degc;  // of the file
  };

  // All three must outlive the reader; the mapping is one without mapping_faults. Reads the header lines; see
  // fault().
  CsvReader(std::string_view bytes, const Furnace& furnace, const CsvMapping& mapping);

  // Why the file as a whole cannot be read: encoding, a missing column, a wrong separator, nothing in it.
  const std::optional<FileFault>& fault() const { return fault_; }
  // The same as an answer (422, bad-csv).
  std::optional<Problem> problem() const;

  // False at the end of the text.
  bool next_row(CsvRow& row);
  // Appends the items of further rows, whole rows as long as `at_most` items may not be exceeded (one row
  // at least). False at the end of the text with nothing appended.
  bool next(std::vector<RawReading>& items, std::size_t at_most);

  int rows() const { return tally_.rows; }
  const CsvTally& tally() const { return tally_; }
  // Once all rows are read: why they show that the mapping is not this file's (no row gave a reading, or more
  // than half of the rows have the wrong number of fields). Empty where they do not.
  std::optional<FileFault> misfit() const;

  const FileText& text() const { return text_; }
  const std::vector<std::string>& header() const { return header_; }  // plain names; none without a header
  const std::vector<std::string>& units() const { return units_; }
  const std::vector<Source>& sources() const { return sources_; }  // in the order of the mapping
  std::size_t time_index() const { return time_index_; }
  std::optional<std::size_t> date_index() const { return date_index_; }
  const RowTimes& times() const { return times_; }

 private:
  void read_header();
  void locate_columns();
  void find_units();
  void order_times();
  bool take_data(std::string_view& record, std::vector<std::string>& fields, Split& split);
  std::string shape_fault(std::string_view record, std::vector<std::string>& fields, Split split) const;
  std::string time_text(const std::vector<std::string>& fields) const;
  void read_cell(const Source& source, const CsvRow& row, CsvCell& cell);
  void count_refused(Refusal refusal, int line, const std::string& reason);
  void add_items(const CsvRow& row, std::vector<RawReading>& items) const;
  bool is_header_again(std::string_view record) const;

  const Furnace& furnace_;
  const CsvMapping& mapping_;
  const FileText text_;
  RecordReader records_;
  RowTimes times_;
  int row_ = 0, repeated_ = 0, named_line_ = 0;
  std::size_t time_index_ = 0, needed_ = 0;
  std::optional<std::size_t> date_index_;
  std::vector<std::string> header_, units_;
  std::vector<std::string_view> header_lines_;
  std::vector<std::string> no_value_;  // lower case
  std::vector<Source> sources_;
  CsvTally tally_;
  CsvRow current_;  // of next(), kept for its memory
  std::optional<FileFault> fault_;
};

struct DecodedCsv {
  std::vector<RawReading> items;
  int rows = 0;
  std::optional<Problem> problem;  // the file cannot be read at all: no items
  std::optional<Problem> misfit;   // its rows show that the mapping is not this file's
};

// The whole file at once, for replay.
DecodedCsv decode_csv(std::string_view text, const Furnace& furnace, const CsvMapping& mapping);

// The answer for a file that is refused as a whole.
Problem bad_csv(const CsvMapping& mapping, const FileFault& fault);

}  // namespace hearthfront::server
