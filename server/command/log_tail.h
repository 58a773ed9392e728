// Reads a logger's file from the start and, if asked again, what has been added since: complete rows, each
// with its time. Owned by one thread. Bounded memory: as many rows as asked for plus one block of the file. A
// row whose time cannot be read gets the time of the row before it, so that the daemon sees and names the
// mistake.
#pragma once

#include <cstdint>
#include <deque>
#include <fstream>
#include <string>

#include "server/base/plant.h"

namespace hearthfront::server {

struct LogRow {
  std::string text;          // without its line end
  std::int64_t time_us = 0;  // microseconds since 1970-01-01 UTC
  int line = 0;              // of the file, from 1
};

class LogTail {
 public:
  // Furnace and mapping must outlive the reader.
  LogTail(std::string path, const Furnace& furnace, const CsvMapping& mapping);

  // Appends rows until `rows` holds `wanted` or the file has no more for now. With `growing`, a last line
  // without line end is left for later: its writer may not be done. False with problem() set on trouble.
  bool fill(std::deque<LogRow>& rows, std::size_t wanted, bool growing);

  const std::string& header() const { return header_; }  // the mapping's header lines, each with a line end
  int header_count() const { return header_count_; }     // lines in it, comments included
  const std::string& problem() const { return problem_; }
  bool started_over() const {
    return started_over_;
  }  // the last fill() found a shorter file, and began at its start

 private:
  bool open();
  bool read_block();
  bool take_line(std::string& line, bool growing);
  bool check_header();
  std::int64_t time_of(const std::string& line);

  const std::string path_;
  const Furnace& furnace_;
  const CsvMapping& mapping_;
  std::ifstream file_;
  std::string buffer_;        // read, not yet split
  std::size_t position_ = 0;  // of the next line in buffer_
  std::uintmax_t consumed_ = 0;
  int line_ = 0;
  std::string header_;
  int header_count_ = 0, header_missing_ = 0;
  bool header_checked_ = false;
  bool started_over_ = false;
  std::int64_t last_time_us_ = INT64_MIN;
  std::string problem_;
};

}  // namespace hearthfront::server
