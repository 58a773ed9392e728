// The rows of reading, refused_reading and their counts, as the writer changes them inside its transaction.
//
// Threads: writer thread only. What a transaction did is kept apart until the writer says whether it was
// committed, so that nothing is announced or counted that is not on disk.
#pragma once

#include <cstdint>
#include <map>
#include <string>
#include <unordered_map>
#include <vector>

#include "storage/store.h"

namespace hearthfront::storage {

class Connection;

// A span that grows to hold what is added.
void widen(std::map<std::int64_t, ChangedSpan>& spans, const ChangedSpan& more);

struct ReadingEffects {
  std::map<std::int64_t, ChangedSpan> changes;  // by channel: rows that are new
  std::uint64_t stored = 0, duplicate = 0, conflict = 0;
};

class ReadingTable {
 public:
  explicit ReadingTable(Connection& connection) : connection_(connection) {}

  // Readings are finite and their channels registered: checked before they were queued.
  std::vector<Taken> append(const std::vector<Reading>& readings);
  void refuse(const std::vector<RefusedReading>& refused);
  // What counts of these readings is another from now on, though no row is new.
  void note_change(const ChangedSpan& span) { widen(effects_.changes, span); }
  void finish();                // writes the counts; the last step before COMMIT
  ReadingEffects committed();   // hands over what the transaction did
  void rolled_back() noexcept;  // forgets it

 private:
  struct Tally {
    std::int64_t stored = 0, conflicts = 0;
  };
  Taken append_one(const Reading& reading);
  std::int64_t values_at(const Reading& reading);
  std::int64_t& newest_time(std::int64_t channel);
  void count_refusal(const RefusedReading& refused);
  bool add_to_count(const std::string& furnace, const std::string& channel, const std::string& reason);
  bool may_name(const std::string& furnace, const std::string& channel);

  Connection& connection_;
  ReadingEffects effects_;
  std::unordered_map<std::int64_t, Tally> tallies_;
  // Newest stored time of each channel: a later reading cannot meet another value, which spares a query for
  // nearly all of them. Valid because nobody else writes.
  std::unordered_map<std::int64_t, std::int64_t> newest_us_;
  bool refused_any_ = false;
};

}  // namespace hearthfront::storage
