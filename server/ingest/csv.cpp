#include "server/ingest/csv.h"

#include <algorithm>
#include <limits>

#include "server/base/file_unit.h"
#include "server/base/utf8.h"

namespace hearthfront::server {
namespace {

std::string lower(std::string_view text) {
  std::string result(text);
  for (char& c : result) {
    if (c >= 'A' && c <= 'Z') c = static_cast<char>(c - 'A' + 'a');
  }
  return result;
}

}  // namespace

CsvReader::CsvReader(std::string_view bytes, const Furnace& furnace, const CsvMapping& mapping)
    : furnace_(furnace),
      mapping_(mapping),
      text_(bytes, mapping.encoding),
      records_(text_.text, mapping),
      times_(mapping),
      fault_(text_.fault) {
  for (const std::string& word : mapping.no_value) no_value_.push_back(lower(word));
  if (!fault_) read_header();
  if (!fault_ && times_.needs_order()) order_times();
}

std::optional<Problem> CsvReader::problem() const {
  if (!fault_) return {};
  return bad_csv(mapping_, *fault_);
}

bool CsvReader::is_header_again(std::string_view record) const {
  return std::find(header_lines_.begin(), header_lines_.end(), record) != header_lines_.end();
}

// The next record that is a row: not empty and no header again.
bool CsvReader::take_data(std::string_view& record, std::vector<std::string>& fields, Split& split) {
  while (records_.take_record(record, fields, split, header_.size())) {
    if (record.find_first_not_of(" \t") == std::string_view::npos) continue;
    if (!is_header_again(record)) return true;
    ++repeated_;
  }
  return false;
}

// Looks through all rows for their times, then begins anew.
void CsvReader::order_times() {
  const RecordReader start = records_;
  std::string_view record;
  std::vector<std::string> fields;
  Split split = Split::whole;
  for (int row = 0; take_data(record, fields, split); ++row) {
    if (split == Split::whole && fields.size() > needed_) times_.look_at(row, time_text(fields));
  }
  times_.end();
  records_ = start;
  repeated_ = 0;
}

// What is wrong with the number of fields; empty where nothing is.
std::string CsvReader::shape_fault(std::string_view record, std::vector<std::string>& fields,
                                   Split split) const {
  if (split != Split::whole) return std::string(fault_text(split));
  const std::size_t wanted = header_.size();
  while (wanted > 0 && fields.size() > wanted && fields.back().empty()) fields.pop_back();
  if (wanted > 0 && fields.size() > wanted) {
    return "has " + std::to_string(fields.size()) + " fields, the header has " + std::to_string(wanted) +
           ": a decimal comma, or a separator inside a text?";
  }
  // Between blanks an empty cell cannot be seen: what follows it would count as another column's.
  if (mapping_.separator == ' ' && wanted > 0 && fields.size() < wanted) {
    return "has " + std::to_string(fields.size()) + " fields, the header has " + std::to_string(wanted) +
           ": a cell without value between blanks?";
  }
  if (fields.size() <= needed_) {
    return "has " + std::to_string(fields.size()) + " fields, the mapping needs " +
           std::to_string(needed_ + 1) + "." + separator_hint(record, mapping_.separator);
  }
  return {};
}

std::string CsvReader::time_text(const std::vector<std::string>& fields) const {
  if (!date_index_) return fields[time_index_];
  return fields[*date_index_] + " " + fields[time_index_];
}

bool CsvReader::next_row(CsvRow& row) {
  std::string_view record;
  Split split = Split::whole;
  if (fault_ || !take_data(record, row.fields, split)) {
    tally_.repeated_headers = repeated_;
    return false;
  }
  const int number = row_++;
  ++tally_.rows;
  row.line = records_.line();
  row.time_us.reset();
  row.refusal = Refusal::none;
  row.cells.clear();
  row.time_text.clear();
  row.reason = shape_fault(record, row.fields, split);
  if (!row.reason.empty()) {
    row.refusal = Refusal::broken_row;
    if (tally_.broken_rows++ == 0) {
      tally_.first_broken_line = row.line;
      tally_.first_broken = row.reason;
    }
    count_refused(row.refusal, row.line, row.reason);
    return true;
  }
  row.time_text = time_text(row.fields);
  std::string reason;
  row.time_us = times_.instant(number, row.time_text, reason);
  if (!row.time_us) {
    row.refusal = Refusal::bad_time;
    row.reason = quoted_text(row.time_text) + ": " + reason;
  }
  row.cells.resize(sources_.size());
  for (std::size_t i = 0; i < sources_.size(); ++i) read_cell(sources_[i], row, row.cells[i]);
  return true;
}

void CsvReader::read_cell(const Source& source, const CsvRow& row, CsvCell& cell) {
  const std::string& field = row.fields[source.index];
  cell = {};
  if (field.empty()) return;
  std::string reason;
  std::optional<double> value = parse_decimal(field, mapping_.decimal, reason, mapping_.thousands);
  if (!value && std::find(no_value_.begin(), no_value_.end(), lower(field)) != no_value_.end()) {
    cell.state = CsvCell::State::no_value;
    ++tally_.no_value;
    ++tally_.no_value_by_text[clean_text(field)];
    return;
  }
  if (!row.time_us) {
    cell.state = CsvCell::State::refused;
    cell.reason = row.reason;
    count_refused(Refusal::bad_time, row.line, row.reason);
  } else if (!value) {
    cell.state = CsvCell::State::refused;
    cell.reason = "column " + quoted_text(source.column->column) + ": " + reason;
    count_refused(Refusal::bad_number, row.line, cell.reason);
  } else {
    cell.state = CsvCell::State::value;
    cell.value = convert(*value * source.column->factor, source.unit, source.channel->unit);
    ++tally_.readings;
  }
}

void CsvReader::count_refused(Refusal refusal, int line, const std::string& reason) {
  ++tally_.refused_by_reason[refusal];
  if (tally_.refused++ > 0) return;
  tally_.first_refused_line = line;
  tally_.first_refused = std::string(server::text(refusal)) + ": " + reason;
}

std::optional<FileFault> CsvReader::misfit() const {
  const auto of_rows = [this](std::size_t count) {
    return std::to_string(count) + " of " + std::to_string(tally_.rows) + " rows";
  };
  if (2 * tally_.broken_rows > tally_.rows) {
    return FileFault{tally_.first_broken_line, of_rows(static_cast<std::size_t>(tally_.broken_rows)) +
                                                   " are not divided as the mapping says; the first, line " +
                                                   std::to_string(tally_.first_broken_line) + ": " +
                                                   tally_.first_broken};
  }
  if (tally_.readings == 0 && tally_.refused > 0) {
    return FileFault{tally_.first_refused_line, "None of the " + std::to_string(tally_.rows) +
                                                    " rows gives a reading; the first fault, line " +
                                                    std::to_string(tally_.first_refused_line) + ": " +
                                                    tally_.first_refused};
  }
  return {};
}

void CsvReader::add_items(const CsvRow& row, std::vector<RawReading>& items) const {
  if (row.refusal == Refusal::broken_row) {
    RawReading& item = items.emplace_back();
    item.furnace = furnace_.id;
    item.line = row.line;
    item.refusal = row.refusal;
    item.detail = row.reason;
    return;
  }
  for (std::size_t i = 0; i < row.cells.size(); ++i) {
    const CsvCell& cell = row.cells[i];
    if (cell.state != CsvCell::State::value && cell.state != CsvCell::State::refused) continue;
    RawReading& item = items.emplace_back();
    item.furnace = furnace_.id;
    item.channel = sources_[i].channel->name;
    item.line = row.line;
    if (cell.state == CsvCell::State::value) {
      item.time_us = *row.time_us;
      item.value = cell.value;
      continue;
    }
    item.refusal = row.time_us ? Refusal::bad_number : Refusal::bad_time;
    item.detail = cell.reason;
    item.time_text = clean_text(row.time_text);
    item.value_text = clean_text(row.fields[sources_[i].index]);
  }
}

bool CsvReader::next(std::vector<RawReading>& items, std::size_t at_most) {
  const std::size_t before = items.size();
  while (items.size() == before || items.size() + std::max<std::size_t>(sources_.size(), 1) <= at_most) {
    if (!next_row(current_)) break;
    add_items(current_, items);
  }
  return items.size() > before;
}

DecodedCsv decode_csv(std::string_view text, const Furnace& furnace, const CsvMapping& mapping) {
  DecodedCsv decoded;
  CsvReader reader(text, furnace, mapping);
  reader.next(decoded.items, std::numeric_limits<std::size_t>::max());
  decoded.rows = reader.rows();
  decoded.problem = reader.problem();
  if (const auto misfit = reader.misfit()) decoded.misfit = bad_csv(mapping, *misfit);
  return decoded;
}

Problem bad_csv(const CsvMapping& mapping, const FileFault& fault) {
  return {422, "bad-csv", "The file does not fit the mapping " + quoted_text(mapping.name), fault.text, {}};
}

}  // namespace hearthfront::server
