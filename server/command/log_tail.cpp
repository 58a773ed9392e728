#include "server/command/log_tail.h"

#include <cerrno>
#include <cstring>
#include <filesystem>

#include "server/ingest/csv.h"

namespace hearthfront::server {
namespace {

constexpr std::size_t block_bytes = 65536;
constexpr std::size_t longest_line_bytes = 65536;  // no logger writes such a line: the file is something else

}  // namespace

LogTail::LogTail(std::string path, const Furnace& furnace, const CsvMapping& mapping)
    : path_(std::move(path)), furnace_(furnace), mapping_(mapping) {}

bool LogTail::open() {
  errno = 0;
  file_.close();
  file_.clear();
  std::error_code error;
  if (std::filesystem::is_directory(path_, error)) {
    problem_ = path_ + " is a folder, not a log file.";
    return false;
  }
  file_.open(path_, std::ios::binary);
  if (!file_) {
    problem_ = "cannot read " + path_ + ": " + std::strerror(errno == 0 ? EIO : errno) + ".";
    return false;
  }
  buffer_.clear();
  position_ = consumed_ = 0;
  line_ = 0;
  header_.clear();
  header_count_ = 0;
  header_missing_ = mapping_.lines_above_rows();
  header_checked_ = false;
  return true;
}

// True where something was added to the buffer.
bool LogTail::read_block() {
  buffer_.erase(0, position_);
  position_ = 0;
  const std::size_t before = buffer_.size();
  buffer_.resize(before + block_bytes);
  file_.clear();  // an end met earlier may lie behind us by now
  file_.read(buffer_.data() + before, static_cast<std::streamsize>(block_bytes));
  const auto got = static_cast<std::size_t>(file_.gcount());
  buffer_.resize(before + got);
  consumed_ += got;
  return got > 0;
}

bool LogTail::take_line(std::string& line, bool growing) {
  std::size_t searched = position_;
  while (true) {
    const std::size_t end = buffer_.find_first_of("\r\n", searched);
    // A CR at the very end may be half of a CRLF.
    const bool whole = end != std::string::npos && (buffer_[end] == '\n' || end + 1 < buffer_.size());
    if (whole) {
      line.assign(buffer_, position_, end - position_);
      position_ = end + (buffer_.compare(end, 2, "\r\n") == 0 ? 2 : 1);
      break;
    }
    if (buffer_.size() - position_ > longest_line_bytes) {
      problem_ =
          path_ + ", line " + std::to_string(line_ + 1) + ": the line does not end; this is no log file.";
      return false;
    }
    const std::size_t left = buffer_.size() - position_;
    if (!read_block()) {
      if (buffer_.empty() || (growing && end == std::string::npos)) return false;
      line.assign(buffer_, 0, std::min(end, buffer_.size()));
      buffer_.clear();
      break;
    }
    searched = left > 0 ? left - 1 : 0;
  }
  ++line_;
  return true;
}

// Lets the daemon's own decoder look at the header, so that a wrong mapping is told at once.
bool LogTail::check_header() {
  header_checked_ = true;
  const Encoding encoding = mapping_.encoding;
  if (header_.starts_with("\xff\xfe") || header_.starts_with("\xfe\xff") || encoding == Encoding::utf16 ||
      encoding == Encoding::utf16_le || encoding == Encoding::utf16_be) {
    problem_ = path_ +
               " is UTF-16, which cannot be followed line by line; let the logger write UTF-8 or "
               "Windows-1252, or upload the file.";
    return false;
  }
  if (mapping_.header_lines == 0) return true;
  const CsvReader reader(header_, furnace_, mapping_);
  if (reader.problem()) problem_ = path_ + ": " + reader.problem()->title + ". " + reader.problem()->detail;
  return problem_.empty();
}

std::int64_t LogTail::time_of(const std::string& line) {
  const DecodedCsv decoded = decode_csv(header_ + line + "\n", furnace_, mapping_);
  for (const RawReading& item : decoded.items) {
    if (item.refusal != Refusal::none) continue;
    last_time_us_ = item.time_us;
    break;
  }
  return last_time_us_;
}

bool LogTail::fill(std::deque<LogRow>& rows, std::size_t wanted, bool growing) {
  started_over_ = false;
  if (!file_.is_open() && !open()) return false;
  std::error_code error;
  const std::uintmax_t size = std::filesystem::file_size(path_, error);
  if (!error && size < consumed_) {
    if (!open()) return false;
    started_over_ = true;
  }
  std::string line;
  while (rows.size() < wanted && take_line(line, growing)) {
    if (header_missing_ > 0) {
      header_ += line + "\n";
      ++header_count_;
      if (mapping_.comment.empty() || !line.starts_with(mapping_.comment)) --header_missing_;
      continue;
    }
    if (!header_checked_ && !check_header()) return false;
    if (line.find_first_not_of(" \t") == std::string::npos) continue;
    const std::int64_t time_us = time_of(line);
    rows.push_back({line, time_us, line_});
  }
  return problem_.empty();
}

}  // namespace hearthfront::server
