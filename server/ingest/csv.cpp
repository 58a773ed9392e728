#include "server/ingest/csv.h"

#include <algorithm>
#include <charconv>
#include <limits>

#include "server/base/nearest.h"
#include "server/base/time_format.h"
#include "server/base/utf8.h"

namespace hearthfront::server {
namespace {

// Tabs stay: they may be the separator.
std::string_view trimmed(std::string_view text) {
  while (!text.empty() && text.front() == ' ') text.remove_prefix(1);
  while (!text.empty() && text.back() == ' ') text.remove_suffix(1);
  return text;
}

std::string quoted(std::string_view text) {
  return "\"" + clean_text(text, 60) + "\"";
}

std::string separator_word(char separator) {
  return separator == '\t' ? "tab" : quoted({&separator, 1});
}

// The mapping's separator is not in the line, but another one is.
std::string separator_hint(std::string_view line, char separator) {
  if (line.find(separator) != std::string_view::npos) return {};
  for (const char other : {';', ',', '\t', '|'}) {
    if (line.find(other) == std::string_view::npos) continue;
    return " The line seems to be separated by " + separator_word(other) + ", the mapping says " +
           separator_word(separator) + ".";
  }
  return {};
}

std::string list_header(const std::vector<std::string>& header) {
  std::string list;
  for (std::size_t i = 0; i < header.size() && i < 30; ++i) list += (i == 0 ? "" : ", ") + quoted(header[i]);
  return list + (header.size() > 30 ? ", …" : "");
}

}  // namespace

CsvReader::CsvReader(std::string_view text, const Furnace& furnace, const CsvMapping& mapping)
    : text_(text), furnace_(furnace), mapping_(mapping) {
  if (text_.substr(0, 3) == "\xef\xbb\xbf") text_.remove_prefix(3);
  const std::string_view start = text_.substr(0, 2);
  if (start == "\xff\xfe" || start == "\xfe\xff" || text_.find('\0') != std::string_view::npos) {
    fail("The file is UTF-16 or not a text at all; save it as CSV in UTF-8.");
  } else if (text_.find_first_not_of(" \t\r\n") == std::string_view::npos) {
    fail("The file is empty.");
  } else {
    read_header();
  }
}

void CsvReader::fail(std::string detail) {
  problem_ = Problem{
      422, "bad-csv", "The file does not fit the mapping " + quoted(mapping_.name), std::move(detail), {}};
}

bool CsvReader::take_line(std::string_view& line) {
  if (position_ >= text_.size()) return false;
  const std::size_t end = std::min(text_.find_first_of("\r\n", position_), text_.size());
  line = text_.substr(position_, end - position_);
  position_ = end + (text_.substr(end, 2) == "\r\n" ? 2 : 1);
  ++line_;
  return true;
}

bool CsvReader::split(std::string_view line, std::vector<std::string>& fields) const {
  fields.clear();
  while (true) {
    while (!line.empty() && line.front() == ' ') line.remove_prefix(1);
    std::string& field = fields.emplace_back();
    if (!line.empty() && line.front() == '"') {
      line.remove_prefix(1);
      while (true) {
        const std::size_t quote = line.find('"');
        if (quote == std::string_view::npos) return false;
        field += line.substr(0, quote);
        line.remove_prefix(quote + 1);
        if (line.empty() || line.front() != '"') break;
        field += '"';  // a doubled quote stands for one (RFC 4180, 2.7)
        line.remove_prefix(1);
      }
      while (!line.empty() && line.front() == ' ') line.remove_prefix(1);
      if (!line.empty() && line.front() != mapping_.separator) return false;
      field = trimmed(field);
    } else {
      const std::size_t end = std::min(line.find(mapping_.separator), line.size());
      field = trimmed(line.substr(0, end));
      line.remove_prefix(end);
    }
    if (line.empty()) return true;
    line.remove_prefix(1);
  }
}

void CsvReader::read_header() {
  std::vector<std::string> header;
  std::string_view line;
  for (int i = 0; i < mapping_.header_lines; ++i) {
    if (!take_line(line)) {
      fail("The file ends before the header: it has " + std::to_string(line_) +
           " lines, the mapping says header_lines = " + std::to_string(mapping_.header_lines) + ".");
      return;
    }
  }
  if (mapping_.header_lines > 0) {
    if (!split(line, header)) {
      fail("The header (line " + std::to_string(line_) + ") has a quote that is not closed.");
      return;
    }
    for (std::string& name : header) name = clean_text(name);
    header_fields_ = header.size();
  }
  locate_columns(header, std::string(line));
}

void CsvReader::locate_columns(const std::vector<std::string>& header, const std::string& header_line) {
  std::string faults;
  const auto locate = [&](const std::string& column) -> std::size_t {
    if (column.size() > 1 && column.front() == '#') {
      std::size_t number = 0;
      std::from_chars(column.data() + 1, column.data() + column.size(), number);
      if (header_fields_ == 0 || number <= header_fields_) return number - 1;
      faults += "There is no column " + column + ": the header has " + std::to_string(header_fields_) + ". ";
      return 0;
    }
    const auto found = std::find(header.begin(), header.end(), trimmed(column));
    if (found == header.end()) {
      faults += "There is no column " + quoted(column) + suggestion(column, header) + ". ";
      return 0;
    }
    if (std::find(found + 1, header.end(), *found) != header.end()) {
      faults += "Column " + quoted(column) + " stands twice; name it by number, \"#1\" is the first. ";
    }
    return static_cast<std::size_t>(found - header.begin());
  };
  time_index_ = locate(mapping_.time_column);
  for (const CsvColumn& column : mapping_.columns) {
    const Channel* channel = furnace_.channel(column.channel);
    sources_.push_back({locate(column.column), &column, channel});
    if (channel == nullptr) faults += "The furnace has no channel " + quoted(column.channel) + ". ";
  }
  if (faults.empty()) return;
  fail(faults + "The header (line " + std::to_string(line_) + ") reads: " + list_header(header) + "." +
       separator_hint(header_line, mapping_.separator));
}

bool CsvReader::next(std::vector<RawReading>& items, std::size_t at_most) {
  if (problem_) return false;
  const std::size_t before = items.size();
  std::string_view line;
  while (items.size() == before || items.size() + std::max<std::size_t>(sources_.size(), 1) <= at_most) {
    if (!take_line(line)) break;
    if (line.find_first_not_of(" \t") != std::string_view::npos) read_row(line, items);
  }
  return items.size() > before;
}

void CsvReader::read_row(std::string_view line, std::vector<RawReading>& items) {
  ++rows_;
  if (!split(line, fields_)) return add_broken("a quote is not closed on this line", items);
  while (header_fields_ > 0 && fields_.size() > header_fields_ && fields_.back().empty()) fields_.pop_back();
  if (header_fields_ > 0 && fields_.size() > header_fields_) {
    return add_broken("has " + std::to_string(fields_.size()) + " fields, the header has " +
                          std::to_string(header_fields_) + ": a decimal comma, or a separator inside a text?",
                      items);
  }
  std::size_t needed = time_index_;
  for (const Source& source : sources_) needed = std::max(needed, source.index);
  if (fields_.size() <= needed) {
    return add_broken("has " + std::to_string(fields_.size()) + " fields, the mapping needs " +
                          std::to_string(needed + 1) + "." + separator_hint(line, mapping_.separator),
                      items);
  }
  RowTime time;
  time.time_us =
      parse_time_as(fields_[time_index_], mapping_.time_format, mapping_.utc_offset_min, time.reason);
  for (const Source& source : sources_) read_cell(source, time, items);
}

void CsvReader::read_cell(const Source& source, const RowTime& time, std::vector<RawReading>& items) const {
  const std::string& cell = fields_[source.index];
  if (cell.empty()) return;
  RawReading& item = items.emplace_back();
  item.furnace = furnace_.id;
  item.channel = source.channel->name;
  item.line = line_;
  std::string reason;
  const std::optional<double> value = parse_decimal(cell, mapping_.decimal, reason);
  if (!time.time_us) {
    item.refusal = Refusal::bad_time;
    item.detail = quoted(fields_[time_index_]) + ": " + time.reason;
  } else if (!value) {
    item.refusal = Refusal::bad_number;
    item.detail = "column " + quoted(source.column->column) + ": " + reason;
  } else {
    item.time_us = *time.time_us;
    item.value = convert(*value, source.column->unit.value_or(source.channel->unit), source.channel->unit);
    return;
  }
  item.time_text = clean_text(fields_[time_index_]);
  item.value_text = clean_text(cell);
}

void CsvReader::add_broken(std::string detail, std::vector<RawReading>& items) const {
  RawReading& item = items.emplace_back();
  item.furnace = furnace_.id;
  item.line = line_;
  item.refusal = Refusal::broken_row;
  item.detail = std::move(detail);
}

DecodedCsv decode_csv(std::string_view text, const Furnace& furnace, const CsvMapping& mapping) {
  DecodedCsv decoded;
  CsvReader reader(text, furnace, mapping);
  reader.next(decoded.items, std::numeric_limits<std::size_t>::max());
  decoded.rows = reader.rows();
  decoded.problem = reader.problem();
  return decoded;
}

std::optional<double> parse_decimal(std::string_view cell, char decimal, std::string& reason) {
  const auto is_digit = [](char c) { return c >= '0' && c <= '9'; };
  std::string number;  // as std::from_chars wants it
  std::size_t i = 0, digits = 0;
  const auto take_digits = [&] {
    for (; i < cell.size() && is_digit(cell[i]); ++i, ++digits) number += cell[i];
  };
  if (i < cell.size() && (cell[i] == '+' || cell[i] == '-')) {
    if (cell[i] == '-') number += '-';
    ++i;
  }
  take_digits();
  if (i < cell.size() && cell[i] == decimal) {
    number += '.';
    ++i;
    take_digits();
  }
  const bool has_mantissa = digits > 0;
  if (has_mantissa && i < cell.size() && (cell[i] == 'e' || cell[i] == 'E')) {
    number += cell[i++];
    if (i < cell.size() && (cell[i] == '+' || cell[i] == '-')) number += cell[i++];
    digits = 0;
    take_digits();
  }
  if (!has_mantissa || digits == 0 || i != cell.size()) {
    const char other = decimal == '.' ? ',' : '.';
    reason = quoted(cell) + " is not a number" +
             (has_mantissa && i < cell.size() && cell[i] == other
                  ? std::string(" (the mapping's decimal sign is ") + separator_word(decimal) + ")"
                  : "");
    return {};
  }
  double value = 0;
  if (std::from_chars(number.data(), number.data() + number.size(), value).ec != std::errc{}) {
    reason = quoted(cell) + " is beyond what a 64-bit floating point number can hold";
    return {};
  }
  return value;
}

}  // namespace hearthfront::server
