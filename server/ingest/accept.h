// The one door through which readings reach storage, whichever way they came: checks each item against the
// plant, the plausible range and the clock, then appends the good ones and keeps the refused ones with
// their reason. When accept() returns, what it calls stored is durable.
//
// Thread-safe: all members are constant after construction and the store has its own lock. Throws Problem
// (http_server.h) where the store cannot take readings; the sender may then send the same again, for a
// reading sent twice is one reading.
#pragma once

#include <cstddef>
#include <cstdint>
#include <map>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "server/base/clock.h"
#include "server/base/plant.h"
#include "server/base/settings.h"
#include "server/ingest/raw_reading.h"

namespace hearthfront::storage {
class Store;
}

namespace hearthfront::server {

enum class Disposition : std::uint8_t { stored, duplicate, conflict, refused };
std::string_view text(Disposition disposition);  // "stored", "duplicate", "conflict", "refused"

struct ReadingOutcome {
  Disposition disposition = Disposition::stored;
  Refusal refusal = Refusal::none;  // and why, where refused
  std::string detail;
};

struct Accepted {
  std::vector<ReadingOutcome> outcomes;  // one for each item, in order
  std::size_t stored = 0, duplicate = 0, conflict = 0, refused = 0;
};

class Acceptor {
 public:
  // Registers every channel of the plant in the store. Plant, clock and store must outlive it.
  Acceptor(const Plant& plant, const Clock& clock, storage::Store& store, const Settings::Ingest& limits);

  // Any number of items; appended in groups of max_batch.
  Accepted accept(const std::vector<RawReading>& items) const;

  // What accept() would refuse the item for, without storing anything; `stored` where it would not.
  ReadingOutcome would_be(const RawReading& item) const;

  std::size_t batch_size() const { return limits_.max_batch; }

  // The store's id of a channel; empty where the plant has no such channel.
  std::optional<std::int64_t> channel_id(std::string_view furnace, std::string_view channel) const;

 private:
  struct Known {
    std::int64_t id = 0;
    const Channel* channel = nullptr;
  };
  const Known* find(std::string_view furnace, std::string_view channel) const;
  ReadingOutcome check(const RawReading& item, std::int64_t now_us, const Known*& known) const;
  void append(const std::vector<RawReading>& items, std::size_t from, std::size_t to,
              Accepted& accepted) const;

  const Plant& plant_;
  const Clock& clock_;
  storage::Store& store_;
  const Settings::Ingest limits_;
  std::map<std::string, std::map<std::string, Known, std::less<>>, std::less<>> known_;
};

// What POST /api/v1/furnaces/{id}/log answers.
struct CsvReport {
  struct RowProblem {
    int line = 0;
    std::string reason;
  };
  int rows = 0;
  std::size_t stored = 0, duplicate = 0, conflict = 0, refused = 0;
  std::size_t no_value = 0;  // cells with a word that means so; neither stored nor refused
  std::map<Refusal, std::size_t> refused_by_reason;
  std::vector<RowProblem> problems;  // the first `max_problems`, one for each line and reason
};

// whole: rows that show that the mapping is not this file's refuse all of it, before anything is stored.
// part: a stretch of a growing file, of which only the header must fit; its rows stand for themselves.
enum class CsvExtent { whole, part };

// Decodes and accepts a logger file in groups, so that memory stays bounded. Throws Problem for a file that
// is refused as a whole (nothing is stored then), and where the store fails part of the way (the text then
// says how far it got).
CsvReport accept_csv(const Acceptor& acceptor, std::string_view text, const Furnace& furnace,
                     const CsvMapping& mapping, CsvExtent extent = CsvExtent::whole,
                     std::size_t max_problems = 100);

}  // namespace hearthfront::server
