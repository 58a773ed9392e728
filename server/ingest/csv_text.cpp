#include "server/ingest/csv_text.h"

#include <algorithm>

#include "server/base/utf8.h"

namespace hearthfront::server {
namespace {

constexpr int most_lines_of_a_record = 50;
constexpr std::size_t longest_record = 65'536;  // bytes over several lines

bool is_blank(char c) {
  return c == ' ' || c == '\t';
}

// Tabs stay: they may be the separator.
std::string_view trimmed(std::string_view text) {
  while (!text.empty() && text.front() == ' ') text.remove_prefix(1);
  while (!text.empty() && text.back() == ' ') text.remove_suffix(1);
  return text;
}

// `rest` begins with a quote; afterwards it begins behind the closing one. False where there is none.
bool take_quoted(std::string_view& rest, std::string& field) {
  rest.remove_prefix(1);
  while (true) {
    const std::size_t quote = rest.find('"');
    if (quote == std::string_view::npos) return false;
    field += rest.substr(0, quote);
    rest.remove_prefix(quote + 1);
    if (rest.empty() || rest.front() != '"') return true;
    field += '"';  // a doubled quote stands for one (RFC 4180, 2.7)
    rest.remove_prefix(1);
  }
}

// Where the run of blanks that ends a field begins.
std::size_t end_of_field(std::string_view rest, std::size_t least_blanks) {
  for (std::size_t i = 0; i < rest.size(); ++i) {
    std::size_t run = 0;
    while (i + run < rest.size() && is_blank(rest[i + run])) ++run;
    if (run >= least_blanks || (run > 0 && rest.substr(i, run).find('\t') != std::string_view::npos))
      return i;
  }
  return rest.size();
}

Split split_at_blanks(std::string_view rest, std::size_t least_blanks, std::vector<std::string>& fields) {
  const auto skip = [&rest] {
    while (!rest.empty() && is_blank(rest.front())) rest.remove_prefix(1);
  };
  for (skip(); !rest.empty(); skip()) {
    if (fields.size() == most_fields) return Split::too_many;
    std::string& field = fields.emplace_back();
    if (rest.front() == '"') {
      if (!take_quoted(rest, field)) return Split::open_quote;
      if (!rest.empty() && !is_blank(rest.front())) return Split::text_after_quote;
    } else {
      const std::size_t end = end_of_field(rest, least_blanks);
      field = trimmed(rest.substr(0, end));
      rest.remove_prefix(end);
    }
  }
  if (fields.empty()) fields.emplace_back();
  return Split::whole;
}

// As many fields as expected; empty ones behind them come from separators at the end of the line.
bool fits(const std::vector<std::string>& fields, std::size_t expected) {
  if (expected == 0 || fields.size() == expected) return true;
  return fields.size() > expected &&
         std::all_of(fields.begin() + static_cast<std::ptrdiff_t>(expected), fields.end(),
                     [](const std::string& field) { return field.empty(); });
}

}  // namespace

Split split_record(std::string_view rest, const CsvMapping& mapping, std::vector<std::string>& fields) {
  fields.clear();
  const char separator = mapping.separator;
  if (separator == ' ') return split_at_blanks(rest, static_cast<std::size_t>(mapping.least_blanks), fields);
  while (fields.size() < most_fields) {
    while (!rest.empty() && rest.front() == ' ') rest.remove_prefix(1);
    std::string& field = fields.emplace_back();
    if (!rest.empty() && rest.front() == '"') {
      if (!take_quoted(rest, field)) return Split::open_quote;
      while (!rest.empty() && rest.front() == ' ') rest.remove_prefix(1);
      if (!rest.empty() && rest.front() != separator) return Split::text_after_quote;
      field = trimmed(field);
    } else {
      const std::size_t end = std::min(rest.find(separator), rest.size());
      field = trimmed(rest.substr(0, end));
      rest.remove_prefix(end);
    }
    if (rest.empty()) return Split::whole;
    rest.remove_prefix(1);
  }
  return Split::too_many;
}

std::string_view fault_text(Split split) {
  switch (split) {
    case Split::whole:
      return "";
    case Split::open_quote:
      return "a quote is not closed on this line";
    case Split::text_after_quote:
      return "text follows a closing quote";
    case Split::too_many:
      return "has more than 2000 fields: another separator, or no table at all?";
  }
  return "";
}

bool RecordReader::take_raw(std::string_view& line) {
  if (position_ >= text_.size()) return false;
  const std::size_t end = std::min(text_.find_first_of("\r\n", position_), text_.size());
  line = text_.substr(position_, end - position_);
  position_ = end + (text_.substr(end, 2) == "\r\n" ? 2 : 1);
  ++line_;
  return true;
}

bool RecordReader::take_line(std::string_view& line) {
  const std::string& comment = mapping_->comment;
  do {
    if (!take_raw(line)) return false;
  } while (!comment.empty() && line.starts_with(comment));
  first_line_ = line_;
  return true;
}

bool RecordReader::take_record(std::string_view& record, std::vector<std::string>& fields, Split& split,
                               std::size_t expected) {
  if (!take_line(record)) return false;
  split = split_record(record, *mapping_, fields);
  if (split != Split::open_quote) return true;
  const std::size_t start = static_cast<std::size_t>(record.data() - text_.data());
  const std::size_t position = position_;
  const int line = line_;
  const auto quotes = [](std::string_view text) { return std::count(text.begin(), text.end(), '"'); };
  auto count = quotes(record);
  std::string_view more;
  for (int i = 1; i < most_lines_of_a_record && take_raw(more); ++i) {
    const std::size_t end = static_cast<std::size_t>(more.data() - text_.data()) + more.size();
    if (end - start > longest_record) break;
    count += quotes(more);
    if (count % 2 != 0) continue;  // still within quotes
    const std::string_view longer = text_.substr(start, end - start);
    const Split again = split_record(longer, *mapping_, fields);
    if (again != Split::whole || !fits(fields, expected)) break;
    record = longer;
    split = again;
    return true;
  }
  position_ = position;
  line_ = line;
  return true;
}

int count_lines(std::string_view text) {
  int lines = 1;
  for (std::size_t i = 0; i < text.size(); ++i) {
    if (text[i] == '\n' || (text[i] == '\r' && text.substr(i + 1, 1) != "\n")) ++lines;
  }
  return lines;
}

std::string plain_name(std::string_view name) {
  std::string plain;
  for (const char c : name) {
    const bool blank = is_blank(c) || c == '\n' || c == '\r';
    if (!blank)
      plain += c;
    else if (!plain.empty() && plain.back() != ' ')
      plain += ' ';
  }
  if (!plain.empty() && plain.back() == ' ') plain.pop_back();
  return plain;
}

std::string quoted_text(std::string_view text) {
  return "\"" + clean_text(text, 60) + "\"";
}

std::string separator_hint(std::string_view line, char separator) {
  if (separator == ' ' || line.find(separator) != std::string_view::npos) return {};
  const auto word = [](char sign) { return sign == '\t' ? "tab" : quoted_text({&sign, 1}); };
  for (const char other : {';', ',', '\t', '|'}) {
    if (line.find(other) == std::string_view::npos) continue;
    return " The line seems to be separated by " + word(other) + ", the mapping says " + word(separator) +
           ".";
  }
  return {};
}

}  // namespace hearthfront::server
