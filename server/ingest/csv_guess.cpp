#include "server/ingest/csv_guess.h"

#include <algorithm>
#include <array>
#include <map>

#include "server/base/file_unit.h"
#include "server/base/time_format.h"
#include "server/base/utf8.h"
#include "server/ingest/csv.h"
#include "server/ingest/csv_guess_parts.h"

namespace hearthfront::server {
namespace {

constexpr std::size_t sample_lines = 300;  // looked at
constexpr double most_rows_agree = 0.8;

Encoding guess_encoding(std::string_view bytes, std::vector<Unsure>& unsure) {
  if (bytes.starts_with("\xff\xfe") || bytes.starts_with("\xfe\xff")) return Encoding::utf16;
  const std::string_view start = bytes.substr(0, 2000);
  std::array<std::size_t, 2> zeros{};
  for (std::size_t i = 0; i < start.size(); ++i) {
    if (start[i] == '\0') ++zeros[i % 2];
  }
  // Text in Latin letters has a zero in every second byte of UTF-16.
  if (zeros[1] > start.size() / 4) return Encoding::utf16_le;
  if (zeros[0] > start.size() / 4) return Encoding::utf16_be;
  const bool ascii = std::all_of(bytes.begin(), bytes.end(), [](char c) { return c >= 0; });
  if (ascii) return Encoding::automatic;
  if (valid_utf8(bytes)) return Encoding::utf8;
  if (bytes.find_first_of("\x81\x8d\x8f\x90\x9d") == std::string_view::npos) return Encoding::windows_1252;
  unsure.push_back({"encoding",
                    "The file is neither UTF-8 nor Windows-1252 throughout; characters such as ° may be "
                    "read wrongly."});
  return Encoding::automatic;
}

std::vector<std::string_view> lines_of(std::string_view text, const CsvMapping& mapping) {
  RecordReader reader(text, mapping);
  std::vector<std::string_view> lines;
  std::string_view line;
  while (lines.size() < sample_lines && reader.take_line(line)) lines.push_back(line);
  return lines;
}

bool is_filled(std::string_view line) {
  return line.find_first_not_of(" \t") != std::string_view::npos;
}

// The first records that are not empty, split; a record that cannot be split counts without fields.
std::vector<Cells> records_of(std::string_view text, const CsvMapping& mapping) {
  RecordReader reader(text, mapping);
  std::vector<Cells> records;
  std::string_view record;
  Cells fields;
  Split split = Split::whole;
  while (records.size() < sample_lines && reader.take_record(record, fields, split, 0)) {
    if (!is_filled(record)) continue;
    if (split != Split::whole) fields.clear();
    records.push_back(fields);
  }
  return records;
}

// The later half surely holds rows.
std::vector<Cells> later(std::vector<Cells> records) {
  records.erase(records.begin(), records.begin() + static_cast<std::ptrdiff_t>(records.size() / 2));
  return records;
}

struct Shape {
  std::string word;
  std::size_t width = 0;  // fields of most rows
  double share = 0;       // of the rows that have it
};

Shape shape_by(const std::string& word, std::string_view text, CsvMapping by) {
  read_separator(word, by);
  const std::vector<Cells> records = later(records_of(text, by));
  std::map<std::size_t, std::size_t> widths;
  std::size_t cells = 0, torn = 0;
  for (const Cells& fields : records) {
    if (fields.empty()) continue;
    ++widths[fields.size()];
    cells += fields.size();
    // Columns that another separator parts show as wide gaps within a cell.
    torn +=
        static_cast<std::size_t>(std::count_if(fields.begin(), fields.end(), [](const std::string& field) {
          return field.find("  ") != std::string::npos || field.find('\t') != std::string::npos;
        }));
  }
  Shape shape{word, 0, 0};
  if (widths.empty() || torn * 5 > cells) return shape;
  const auto most = std::max_element(widths.begin(), widths.end(),
                                     [](const auto& a, const auto& b) { return a.second < b.second; });
  shape.width = most->first;
  shape.share = static_cast<double>(most->second) / static_cast<double>(records.size());
  return shape;
}

// The first in order of how surely it separates: a comma may as well be a decimal sign, a blank part of a
// time.
Shape guess_separator(std::string_view text, const CsvMapping& mapping, std::vector<Unsure>& unsure) {
  Shape best;
  for (const char* word : {";", "\t", "|", ",", "wide_spaces", "spaces"}) {
    Shape shape = shape_by(word, text, mapping);
    if (shape.width < 2) continue;
    if (shape.share >= most_rows_agree) return shape;
    if (shape.share > best.share) best = shape;
  }
  unsure.push_back({"separator", best.width == 0
                                     ? "No separator divides the lines into columns."
                                     : "No separator divides all rows into the same number of columns."});
  return best;
}

// "#" or "//" where the first lines begin with it and the last of them is not the line of names.
std::string guess_comment(const std::vector<std::string_view>& lines, const CsvMapping& mapping,
                          std::size_t width) {
  for (const std::string_view sign : {"#", "//"}) {
    std::string_view last;
    bool all = true;
    for (const std::string_view line : lines) {
      if (line.starts_with(sign))
        last = line;
      else if (is_filled(line))
        all = false;
    }
    if (last.empty() || all) continue;
    Cells fields;
    split_record(last, mapping, fields);
    if (fields.size() + 1 < width) return std::string(sign);
  }
  return {};
}

bool is_units_line(const Cells& fields) {
  bool any = false;
  for (const std::string& field : fields) {
    if (field.empty()) continue;
    if (!is_unit_word(field)) return false;
    any = true;
  }
  return any;
}

bool parses(const Cells& fields, const GuessedTimes& times) {
  if (fields.size() <= std::max(times.time_index, times.date_index.value_or(0))) return false;
  const std::string text = times.date_index ? fields[*times.date_index] + " " + fields[times.time_index]
                                            : fields[times.time_index];
  std::string reason;
  return parse_written_time(text, times.format, reason).has_value();
}

void guess_zone(const Furnace& furnace, bool has_zone, CsvGuess& guess) {
  if (has_zone) return;
  for (const CsvMapping& other : furnace.csv_mappings) {
    if (other.time_zone.empty() && other.utc_offset_min == 0) continue;
    guess.mapping.time_zone = other.time_zone;
    guess.mapping.utc_offset_min = other.utc_offset_min;
    guess.unsure.push_back({"time_zone", "The times carry no zone; that of the mapping \"" + other.name +
                                             "\" of this furnace is taken."});
    return;
  }
  guess.unsure.push_back({"time_zone",
                          "The times carry no zone; UTC is taken. Choose the one that the logger's clock "
                          "shows, such as Europe/Berlin."});
}

// A record above the rows.
struct Above {
  int lines_above = 0;  // comments not counted
  Cells fields;         // none: an empty line
};

class Guesser {
 public:
  Guesser(const Furnace& furnace, std::int64_t now_us) : furnace_(furnace), now_us_(now_us) {}

  CsvGuess run(std::string_view bytes) {
    guess_.mapping.encoding = guess_encoding(bytes, guess_.unsure);
    const FileText text(bytes, guess_.mapping.encoding);
    if (text.fault) throw Problem{422, "bad-csv", "The file cannot be read", text.fault->text, {}};
    const Shape shape = guess_separator(text.text, guess_.mapping, guess_.unsure);
    if (shape.width == 0) return std::move(guess_);
    read_separator(shape.word, guess_.mapping);
    guess_.mapping.comment = guess_comment(lines_of(text.text, guess_.mapping), guess_.mapping, shape.width);
    guess_table(text.text, shape.width);
    return std::move(guess_);
  }

 private:
  void guess_table(std::string_view text, std::size_t width) {
    std::vector<Cells> rows = later(records_of(text, guess_.mapping));
    std::erase_if(rows, [width](const Cells& fields) { return fields.size() != width; });
    std::optional<GuessedTimes> times = guess_times(rows, now_us_);
    // In a short file lines of the header may be among them.
    while (!times && rows.size() > 1) {
      rows = later(std::move(rows));
      times = guess_times(rows, now_us_);
    }
    if (!times) {
      guess_.mapping.time_column.clear();
      guess_.unsure.push_back(
          {"time_column", "No column could be read as a time. Name the column and the format."});
    }
    guess_header(text, width, times);
    std::vector<std::size_t> time_columns;
    if (times) {
      guess_.mapping.time_column = column_word(names_, times->time_index);
      guess_.mapping.time_format = times->format;
      time_columns.push_back(times->time_index);
      if (times->date_index) {
        guess_.mapping.date_column = column_word(names_, *times->date_index);
        time_columns.push_back(*times->date_index);
      }
      if (!times->unsure.empty()) guess_.unsure.push_back({"time_format", times->unsure});
      guess_zone(furnace_, times->has_zone, guess_);
    }
    guess_signs(rows, time_columns, guess_);
    guess_columns(rows, names_, units_, time_columns, furnace_, guess_);
  }

  // The rows begin where a time can be read; the filled record above names the columns.
  void guess_header(std::string_view text, std::size_t width, const std::optional<GuessedTimes>& times) {
    RecordReader reader(text, guess_.mapping);
    std::vector<Above> above;
    std::string_view record;
    Cells fields;
    Split split = Split::whole;
    int lines = 0;
    while (above.size() < sample_lines && reader.take_record(record, fields, split, 0)) {
      if (times ? split == Split::whole && parses(fields, *times) : !above.empty()) break;
      above.push_back({lines, is_filled(record) ? fields : Cells{}});
      lines += count_lines(record);
    }
    const int all = lines;
    while (!above.empty() && above.back().fields.empty()) above.pop_back();
    if (above.empty()) {
      guess_.mapping.header_lines = all;
      return;
    }
    Above named = std::move(above.back());
    above.pop_back();
    if (is_units_line(named.fields) && !above.empty() && !above.back().fields.empty()) {
      units_ = std::move(named.fields);
      guess_.mapping.units_line = true;
      named = std::move(above.back());
    }
    guess_.mapping.header_lines = named.lines_above + 1;
    names_ = std::move(named.fields);
    for (std::string& name : names_) name = plain_name(clean_text(name));
    for (std::string& unit : units_) unit = plain_name(clean_text(unit));
    while (names_.size() > width && names_.back().empty()) names_.pop_back();
    if (names_.size() + 1 < width || names_.size() > width) {
      guess_.unsure.push_back({"header_lines", "The line taken for the names has " +
                                                   std::to_string(names_.size()) +
                                                   " columns, the rows have " + std::to_string(width) + "."});
    }
  }

  const Furnace& furnace_;
  const std::int64_t now_us_;
  CsvGuess guess_;
  Cells names_, units_;
};

}  // namespace

std::string column_word(const Cells& names, std::size_t index) {
  const bool named = index < names.size() && !names[index].empty() && names[index].front() != '#' &&
                     names[index].size() <= 100 && std::count(names.begin(), names.end(), names[index]) == 1;
  return named ? names[index] : "#" + std::to_string(index + 1);
}

CsvGuess guess_csv_mapping(std::string_view bytes, const Furnace& furnace, std::int64_t now_us) {
  return Guesser(furnace, now_us).run(bytes);
}

}  // namespace hearthfront::server
