// CsvReader (csv.h): the lines above the rows, and where the mapping's columns are found.
#include <algorithm>
#include <charconv>

#include "server/base/file_unit.h"
#include "server/base/nearest.h"
#include "server/base/utf8.h"
#include "server/ingest/csv.h"

namespace hearthfront::server {
namespace {

std::string list_header(const std::vector<std::string>& header) {
  std::string list;
  for (std::size_t i = 0; i < header.size() && i < 30; ++i)
    list += (i == 0 ? "" : ", ") + quoted_text(header[i]);
  return list + (header.size() > 30 ? ", …" : "");
}

bool no_blank_line(std::string_view line) {
  return line.find_first_not_of(" \t") != std::string_view::npos;
}

}  // namespace

void CsvReader::read_header() {
  std::string_view line;
  const auto too_short = [this] {
    fault_ =
        FileFault{records_.line(),
                  "The file ends before the header: it has " + std::to_string(records_.line()) +
                      " lines, the mapping says header_lines = " + std::to_string(mapping_.header_lines) +
                      (mapping_.units_line ? " and a units line." : ".")};
  };
  for (int i = 0; i + 1 < mapping_.header_lines; ++i) {
    if (!records_.take_line(line)) return too_short();
    if (no_blank_line(line)) header_lines_.push_back(line);
  }
  Split split = Split::whole;
  std::string header_line;
  if (mapping_.header_lines > 0) {
    if (!records_.take_record(line, header_, split, 0)) return too_short();
    if (split != Split::whole) {
      fault_ = FileFault{records_.line(), "The header (line " + std::to_string(records_.line()) +
                                              "): " + std::string(fault_text(split)) + "."};
      return;
    }
    header_line = line;
    if (no_blank_line(line)) header_lines_.push_back(line);
    for (std::string& name : header_) name = plain_name(clean_text(name));
  }
  named_line_ = records_.line();
  if (mapping_.units_line) {
    if (!records_.take_record(line, units_, split, 0)) return too_short();
    if (no_blank_line(line)) header_lines_.push_back(line);
    for (std::string& unit : units_) unit = plain_name(clean_text(unit));
  }
  locate_columns();
  if (fault_) {
    fault_->line = named_line_;
    if (mapping_.header_lines > 0)
      fault_->text += "The header (line " + std::to_string(named_line_) + ") reads: " + list_header(header_) +
                      "." + separator_hint(header_line, mapping_.separator);
    return;
  }
  find_units();
}

void CsvReader::locate_columns() {
  std::string faults;
  const std::size_t wide = header_.size();
  const auto locate = [&](const std::string& column) -> std::size_t {
    if (column.empty()) {
      faults += "The mapping names no column that holds the time. ";
      return 0;
    }
    if (column.size() > 1 && column.front() == '#') {
      std::size_t number = 0;
      std::from_chars(column.data() + 1, column.data() + column.size(), number);
      if (number > 0 && (wide == 0 || number <= wide)) return number - 1;
      faults += "There is no column " + column + ": the header has " + std::to_string(wide) + ". ";
      return 0;
    }
    const auto found = std::find(header_.begin(), header_.end(), plain_name(column));
    if (found == header_.end()) {
      faults += "There is no column " + quoted_text(column) + suggestion(column, header_) + ". ";
      return 0;
    }
    if (std::find(found + 1, header_.end(), *found) != header_.end())
      faults += "Column " + quoted_text(column) + " stands twice; name it by number, \"#1\" is the first. ";
    return static_cast<std::size_t>(found - header_.begin());
  };
  time_index_ = needed_ = locate(mapping_.time_column);
  if (!mapping_.date_column.empty()) {
    date_index_ = locate(mapping_.date_column);
    needed_ = std::max(needed_, *date_index_);
  }
  for (const CsvColumn& column : mapping_.columns) {
    const Channel* channel = furnace_.channel(column.channel);
    const std::size_t index = locate(column.column);
    sources_.push_back({index, &column, channel, FileUnit::degc});
    needed_ = std::max(needed_, index);
    if (channel == nullptr) faults += "The furnace has no channel " + quoted_text(column.channel) + ". ";
  }
  if (!faults.empty()) fault_ = FileFault{0, std::move(faults)};
}

void CsvReader::find_units() {
  for (Source& source : sources_) {
    source.unit = source.column->unit.value_or(file_unit_of(source.channel->unit));
    if (!source.column->unit_from_header) continue;
    const std::string below = source.index < units_.size() ? units_[source.index] : "";
    const std::string above = source.index < header_.size() ? header_[source.index] : "";
    auto unit = unit_in_words(below, source.channel->role);
    if (!unit) unit = unit_in_words(above, source.channel->role);
    if (!unit) {
      fault_ = FileFault{named_line_, "Column " + quoted_text(source.column->column) +
                                          ": unit = \"from header\", but neither " + quoted_text(above) +
                                          " (line " + std::to_string(named_line_) +
                                          ") nor a units line names a unit of a " +
                                          std::string(server::text(source.channel->role)) + "."};
      return;
    }
    source.unit = *unit;
  }
}

}  // namespace hearthfront::server
