#include "server/ingest/csv_preview.h"

#include <algorithm>
#include <cstdio>
#include <cstdlib>
#include <set>

#include "server/base/file_unit.h"
#include "server/base/number_text.h"
#include "server/base/utf8.h"

namespace hearthfront::server {
namespace {

constexpr std::size_t most_rows = 30, most_lines = 30, most_problems = 100, most_columns = 200;

std::string offset_text(int minutes) {
  if (minutes == 0) return "UTC";
  char text[32];
  std::snprintf(text, sizeof text, "UTC%c%02d:%02d", minutes < 0 ? '-' : '+', std::abs(minutes) / 60,
                std::abs(minutes) % 60);
  return text;
}

class Previewer {
 public:
  Previewer(std::string_view bytes, const Furnace& furnace, const CsvMapping& mapping, const Judge& judge)
      : furnace_(furnace), mapping_(mapping), judge_(judge), reader_(bytes, furnace, mapping) {}

  CsvPreview run() {
    seen_.fault = reader_.fault();
    if (!seen_.fault && mapping_.columns.empty()) seen_.fault = {0, "No column of the file feeds a channel."};
    show_text();
    if (!reader_.fault()) read_rows();
    describe_columns();
    warn();
    return std::move(seen_);
  }

 private:
  void show_text() {
    seen_.encoding = reader_.text().encoding;
    for (const std::string& name : reader_.header())
      if (seen_.header.size() < most_columns) seen_.header.push_back(name);
    for (const std::string& unit : reader_.units())
      if (seen_.units.size() < most_columns) seen_.units.push_back(unit);
    std::string_view rest = reader_.text().text;
    for (int line = 1; !rest.empty() && seen_.raw_lines.size() < most_lines; ++line) {
      const std::size_t end = std::min(rest.find_first_of("\r\n"), rest.size());
      seen_.raw_lines.push_back({line, clean_text(rest.substr(0, end), 300)});
      rest.remove_prefix(std::min(rest.size(), end + (rest.substr(end, 2) == "\r\n" ? 2 : 1)));
    }
  }

  void read_rows() {
    for (const CsvReader::Source& source : reader_.sources())
      seen_.channels.push_back({source.channel, 0, 0, 0, {}, {}});
    CsvRow row;
    while (reader_.next_row(row)) {
      widest_ = std::max(widest_, row.fields.size());
      for (std::size_t i = 0; i < row.cells.size(); ++i) take_cell(i, row);
      if (row.cells.empty()) count_refused(row.refusal, row.line, row.reason);
      if (row.time_us) take_time(*row.time_us, row.line);
      if (seen_.rows.size() < most_rows) keep(row);
    }
    const CsvTally& tally = reader_.tally();
    seen_.row_count = tally.rows;
    seen_.repeated_headers = tally.repeated_headers;
    seen_.no_value = tally.no_value;
    seen_.no_value_by_text = tally.no_value_by_text;
    if (!seen_.fault) seen_.fault = reader_.misfit();
    if (steps_.empty()) return;
    const auto middle = steps_.begin() + static_cast<std::ptrdiff_t>(steps_.size() / 2);
    std::nth_element(steps_.begin(), middle, steps_.end());
    seen_.interval_s = static_cast<double>(*middle) * 1e-6;
  }

  void take_cell(std::size_t i, CsvRow& row) {
    CsvCell& cell = row.cells[i];
    CsvPreview::Summary& summary = seen_.channels[i];
    if (cell.state == CsvCell::State::no_value) ++summary.no_value;
    Refusal refusal = row.time_us ? Refusal::bad_number : Refusal::bad_time;
    if (cell.state == CsvCell::State::value && judge_) {
      RawReading item;
      item.furnace = furnace_.id;
      item.channel = summary.channel->name;
      item.time_us = *row.time_us;
      item.value = cell.value;
      const ReadingOutcome outcome = judge_(item);
      if (outcome.disposition == Disposition::refused) {
        cell.state = CsvCell::State::refused;
        cell.reason = outcome.detail;
        refusal = outcome.refusal;
      }
    }
    if (cell.state == CsvCell::State::refused) {
      ++summary.refused;
      count_refused(refusal, row.line, cell.reason);
    } else if (cell.state == CsvCell::State::value) {
      ++summary.readings;
      ++seen_.readings;
      summary.lowest = std::min(summary.lowest.value_or(cell.value), cell.value);
      summary.highest = std::max(summary.highest.value_or(cell.value), cell.value);
    }
  }

  void count_refused(Refusal refusal, int line, const std::string& detail) {
    ++seen_.refused;
    ++seen_.refused_by_reason[refusal];
    if (seen_.problems.size() >= most_problems) return;
    std::string reason = std::string(text(refusal)) + ": " + detail;
    const bool told = !seen_.problems.empty() && seen_.problems.back().line == line &&
                      seen_.problems.back().reason == reason;
    if (!told) seen_.problems.push_back({line, std::move(reason)});
  }

  void take_time(std::int64_t time_us, int line) {
    if (before_us_ && time_us < *before_us_ && backward_++ == 0) backward_line_ = line;
    if (before_us_ && time_us > *before_us_) steps_.push_back(time_us - *before_us_);
    before_us_ = time_us;
    seen_.first_us = std::min(seen_.first_us.value_or(time_us), time_us);
    seen_.last_us = std::max(seen_.last_us.value_or(time_us), time_us);
  }

  void keep(const CsvRow& row) {
    CsvPreview::Row& kept = seen_.rows.emplace_back();
    kept.line = row.line;
    for (const std::string& field : row.fields)
      if (kept.cells.size() < most_columns) kept.cells.push_back(clean_text(field));
    kept.time_us = row.time_us;
    kept.reason = row.reason;
    kept.values = row.cells;
    if (!row.time_us) return;
    if (reader_.times().zone()) {
      kept.local = reader_.times().zone()->text(*row.time_us);
      return;
    }
    const std::int64_t local_us = *row.time_us + std::int64_t{mapping_.utc_offset_min} * 60'000'000;
    kept.local = format_time(std::clamp(local_us, earliest_time_us, latest_time_us));
    kept.local.back() = ' ';
    kept.local[10] = ' ';
    kept.local += offset_text(mapping_.utc_offset_min);
  }

  void describe_columns() {
    const std::vector<std::string>& header = reader_.header();
    for (std::size_t i = 0; i < std::min(std::max(header.size(), widest_), most_columns); ++i) {
      CsvPreview::Column& column = seen_.columns.emplace_back();
      column.column = "#" + std::to_string(i + 1);
      if (i < header.size() && !header[i].empty() && header[i].front() != '#' &&
          std::count(header.begin(), header.end(), header[i]) == 1)
        column.column = header[i];
    }
    if (reader_.fault()) return;
    std::vector<CsvPreview::Column>& columns = seen_.columns;
    const auto use = [&columns](std::size_t index, CsvPreview::Use as) {
      if (index < columns.size()) columns[index].use = as;
    };
    use(reader_.time_index(), CsvPreview::Use::time);
    if (reader_.date_index()) use(*reader_.date_index(), CsvPreview::Use::date);
    for (const CsvReader::Source& source : reader_.sources()) {
      if (source.index >= columns.size()) continue;
      CsvPreview::Column& column = columns[source.index];
      column.use = CsvPreview::Use::channel;
      column.channel = source.channel->name;
      column.unit_in_file = source.unit;
      column.unit = source.channel->unit;
    }
  }

  void add_warning(std::string kind, std::string text) {
    seen_.warnings.push_back({std::move(kind), std::move(text)});
  }

  void warn() {
    if (seen_.encoding == Encoding::automatic && !valid_utf8(reader_.text().text))
      add_warning("encoding",
                  "The file is not UTF-8; its further characters are read as ISO-8859-1. Better say which "
                  "encoding it has.");
    if (reader_.fault()) return;
    if (backward_ > 0)
      add_warning("times run backward", "In " + std::to_string(backward_) +
                                            " rows the time is before that of the row "
                                            "above; the first is line " +
                                            std::to_string(backward_line_) + ".");
    warn_of_clock_changes();
    if (const auto future = seen_.refused_by_reason.find(Refusal::future_time);
        future != seen_.refused_by_reason.end())
      add_warning("future", std::to_string(future->second) +
                                " readings lie ahead of the daemon's clock: are day and "
                                "month, and the time zone, right?");
    for (std::size_t i = 0; i < seen_.channels.size(); ++i)
      warn_of_column(reader_.sources()[i], seen_.channels[i]);
  }

  void warn_of_clock_changes() {
    if (!reader_.times().zone() || !seen_.first_us) return;
    for (const ClockChange& change : reader_.times().zone()->changes(*seen_.first_us, *seen_.last_us)) {
      add_warning("clock change", "The clocks of " + mapping_.time_zone + " change within the file, at " +
                                      format_time(change.at_us) + ", from " + offset_text(change.before_min) +
                                      " to " + offset_text(change.after_min) +
                                      ": look at the rows around it.");
    }
  }

  void warn_of_column(const CsvReader::Source& source, const CsvPreview::Summary& summary) {
    const std::string column = "Column " + quoted_text(source.column->column);
    const Role role = source.channel->role;
    std::optional<FileUnit> named;
    if (source.index < reader_.units().size()) named = unit_in_words(reader_.units()[source.index], role);
    if (!named && source.index < reader_.header().size())
      named = unit_in_words(reader_.header()[source.index], role);
    if (named && *named != source.unit)
      add_warning("unit", column + " says " + std::string(text(*named)) + " in the header, but is read as " +
                              std::string(text(source.unit)) + ".");
    if (seen_.row_count > 0 && summary.readings == 0)
      add_warning("no values",
                  column + " gives not one reading for channel \"" + summary.channel->name + "\".");
    else if (seen_.interval_s && *seen_.interval_s > summary.channel->gap_limit_s)
      add_warning("interval", "Rows come every " + number_text(*seen_.interval_s) +
                                  " s, which is beyond the gap limit of "
                                  "channel \"" +
                                  summary.channel->name + "\" (" + number_text(summary.channel->gap_limit_s) +
                                  " s): each would stand as a gap.");
  }

  const Furnace& furnace_;
  const CsvMapping& mapping_;
  const Judge& judge_;
  CsvReader reader_;
  CsvPreview seen_;
  std::size_t widest_ = 0;  // row
  std::vector<std::int64_t> steps_;
  std::optional<std::int64_t> before_us_;
  int backward_ = 0, backward_line_ = 0;
};

}  // namespace

CsvPreview preview_csv(std::string_view bytes, const Furnace& furnace, const CsvMapping& mapping,
                       const Judge& judge) {
  return Previewer(bytes, furnace, mapping, judge).run();
}

}  // namespace hearthfront::server
