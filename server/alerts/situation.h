// What the rules say at one look: which conditions were judged, and which are there. Plain data; the rules
// are pure functions (rules.h), the book makes alerts of it (alert_book.h).
//
// Times are in the base of the rule: the time of readings for what concerns the process, so that a fast or
// slow clock changes nothing, the daemon's clock for silence and for the daemon itself.
#pragma once

#include <cstdint>
#include <optional>
#include <set>
#include <string>
#include <string_view>
#include <vector>

namespace hearthfront::server {

enum class Severity { note, warning, urgent };
const char* text(Severity severity);            // "note", "warning", "urgent"
Severity severity_from(std::string_view word);  // of a stored row

// What tells one condition from another.
struct ConditionKey {
  std::string kind, furnace;  // furnace empty: the daemon's own
  std::int64_t load = 0;      // 0: none
  std::string subject;        // item, channel, segment ...; may be empty
  std::string text() const;   // "kind|furnace|load|subject"; of a load without the furnace
};

struct Situation {
  ConditionKey condition;
  Severity severity = Severity::warning;
  // False: neither there nor surely gone (between the two limits of a hysteresis); keeps what is, starts
  // nothing.
  bool present = true;
  std::string sentence, advice;
  std::int64_t at_us = 0;
  std::optional<std::int64_t> since_us;  // where the rule knows when it began
  double hold_s = 0;                     // there for so long before it is told
};

// One or all subjects of a kind were looked at: what has no situation is gone, and past once it has been gone
// for `clear_hold_s`. What nobody judged stays as it is.
struct Judged {
  std::string kind, furnace;
  std::int64_t load = 0;
  std::optional<std::string> subject;  // none: all
  std::int64_t at_us = 0;
  double clear_hold_s = 0;
};

struct Findings {
  std::vector<Judged> judged;
  std::vector<Situation> situations;
  std::set<std::int64_t> gone_loads;    // ended or cancelled: nothing of theirs can be there
  std::set<std::string> gone_furnaces;  // no longer in the plant file; their loads are judged by themselves

  void add(Findings other);
};

}  // namespace hearthfront::server
