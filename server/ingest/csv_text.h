// A logger file as text: bytes to UTF-8, lines, records and fields. RFC 4180 with what loggers do besides:
// any of LF, CRLF and CR, comment lines, blanks as separator, quoted fields over several lines. One thread.
#pragma once

#include <cstddef>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "server/base/csv_mapping.h"

namespace hearthfront::server {

// What is wrong with a file as a whole. Line from 1; 0: no line is to blame.
struct FileFault {
  int line = 0;
  std::string text;
};

// The bytes as UTF-8. `text` views the bytes themselves where nothing had to be converted, so they must
// outlive it; neither copied nor moved.
struct FileText {
  FileText(std::string_view bytes, Encoding encoding);
  FileText(const FileText&) = delete;
  FileText& operator=(const FileText&) = delete;

  std::string_view text;  // without byte order mark; with `automatic` it may hold bytes that are not UTF-8
  Encoding encoding;      // as read: of `automatic` the one that was found
  std::optional<FileFault> fault;

 private:
  void convert(std::string_view bytes, const char* from);
  std::string converted_;
};

enum class Split { whole, open_quote, text_after_quote, too_many };
inline constexpr std::size_t most_fields = 2000;  // of a record; no logger has as many channels
std::string_view fault_text(Split split);         // "a quote is not closed on this line"; empty for whole

// The fields of one record, trimmed. Quotes as in RFC 4180, spaces around them allowed.
Split split_record(std::string_view record, const CsvMapping& mapping, std::vector<std::string>& fields);

class RecordReader {
 public:
  // Both must outlive it.
  RecordReader(std::string_view text, const CsvMapping& mapping) : text_(text), mapping_(&mapping) {}

  // The next line that is no comment. False at the end.
  bool take_line(std::string_view& line);
  // The next record with its fields. A quoted field may go on over line ends, 50 lines at most; where the
  // text up to its closing quote then is no record of `expected` fields (0: any number), the first line alone
  // is the record and `split` tells what is wrong with it.
  bool take_record(std::string_view& record, std::vector<std::string>& fields, Split& split,
                   std::size_t expected);

  int line() const { return first_line_; }  // where the line or record taken last begins, from 1

 private:
  bool take_raw(std::string_view& line);

  std::string_view text_;
  const CsvMapping* mapping_;
  std::size_t position_ = 0;
  int line_ = 0, first_line_ = 0;
};

// Lines of a text up to its end, the last one counted without line end as well.
int count_lines(std::string_view text);
// Runs of blanks, tabs and line breaks as one blank each, none at the ends: header names that are broken over
// lines compare equal to how a person writes them.
std::string plain_name(std::string_view name);
// " The line seems to be separated by ..." where the separator is not in the line but another one is; else
// empty.
std::string separator_hint(std::string_view line, char separator);
std::string quoted_text(std::string_view text);  // in quotes, UTF-8, at most 60 bytes

}  // namespace hearthfront::server
