// accept_csv (accept.h): a logger file from text to storage, group by group.
#include "server/api/http_server.h"
#include "server/ingest/accept.h"
#include "server/ingest/csv.h"

namespace hearthfront::server {
namespace {

void add_problems(const std::vector<RawReading>& items, const Accepted& accepted, std::size_t max_problems,
                  CsvReport& report) {
  for (std::size_t i = 0; i < items.size() && report.problems.size() < max_problems; ++i) {
    const ReadingOutcome& outcome = accepted.outcomes[i];
    std::string reason;
    if (outcome.disposition == Disposition::refused) {
      reason = std::string(text(outcome.refusal)) + ": " + outcome.detail;
    } else if (outcome.disposition == Disposition::conflict) {
      reason = "conflict: channel \"" + items[i].channel + "\" has another value at this time already";
    } else {
      continue;
    }
    // A bad time says the same about every cell of its row.
    const bool told = !report.problems.empty() && report.problems.back().line == items[i].line &&
                      report.problems.back().reason == reason;
    if (!told) report.problems.push_back({items[i].line, std::move(reason)});
  }
}

}  // namespace

CsvReport accept_csv(const Acceptor& acceptor, std::string_view text, const Furnace& furnace,
                     const CsvMapping& mapping, CsvExtent extent, std::size_t max_problems) {
  CsvReport report;
  if (extent == CsvExtent::whole) {
    CsvReader rehearsal(text, furnace, mapping);
    CsvRow row;
    while (rehearsal.next_row(row)) {
    }
    if (const auto misfit = rehearsal.misfit()) throw bad_csv(mapping, *misfit);
  }
  CsvReader reader(text, furnace, mapping);
  if (const auto problem = reader.problem()) throw Problem(*problem);
  std::vector<RawReading> items;
  int last_line = 0;
  while (items.clear(), reader.next(items, acceptor.batch_size())) {
    Accepted accepted;
    try {
      accepted = acceptor.accept(items);
    } catch (Problem& problem) {
      if (last_line > 0) {
        problem.detail += " The file is taken care of up to line " + std::to_string(last_line) +
                          "; sending it again is safe.";
      }
      throw;
    }
    report.stored += accepted.stored;
    report.duplicate += accepted.duplicate;
    report.conflict += accepted.conflict;
    report.refused += accepted.refused;
    for (const ReadingOutcome& outcome : accepted.outcomes) {
      if (outcome.disposition == Disposition::refused) ++report.refused_by_reason[outcome.refusal];
    }
    add_problems(items, accepted, max_problems, report);
    last_line = items.back().line;
  }
  report.rows = reader.rows();
  report.no_value = reader.tally().no_value;
  return report;
}

}  // namespace hearthfront::server
