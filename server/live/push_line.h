// A pusher line: its chambers are zones with tray positions, one push moves every tray on by one. A load's
// position is counted in pushes since it came onto the line; only where a push takes it into the next zone,
// or off the line, is the load itself revised.
#pragma once

#include <cstdint>
#include <memory>
#include <optional>
#include <string>
#include <vector>

#include "server/live/load_definition.h"
#include "storage/store.h"

namespace hearthfront::server {

// Where the stored stays of a load are, from its definition; `places` from its copy of the furnace. Nothing
// for the time outside.
std::vector<storage::Stay> stays_of(const LoadDefinition& load);

// The row of a load as its definition says; id, revision and created_us are the caller's.
storage::LoadRow row_of(const LoadDefinition& load);

// When the load came onto the furnace it is in at `at_us`, without leaving it since; empty outside.
std::optional<std::int64_t> came_us(const LoadDefinition& load, std::int64_t at_us);
// 1 is the first tray position: the pushes since the load came, from the first position of the zone that it
// came into or was put into by hand. Empty where the load is on no line.
std::optional<int> line_position(const LoadDefinition& load, storage::Reader& reader, std::int64_t at_us);
// The zone that a position lies in; empty beyond the last.
std::optional<std::string> zone_at(const Furnace& line, int position);

// Takes a load through the pushes that happened since it came where it is: a tray that is entered late is
// where the line has carried it. Returns whether anything changed.
bool follow_line(LoadDefinition& load, storage::Reader& reader, std::int64_t until_us);

// How the pushes of a line stand, to be looked at before follow_line: the store refuses a load that was put
// on the line by it where the line was pushed meanwhile.
storage::LineSeen line_seen(const std::string& furnace, storage::Reader& reader);

struct MovedLoad {
  std::int64_t id = 0;
  std::string name, from;         // zone
  std::optional<std::string> to;  // empty: it left the line and ended
};

// Moves everything on the line. One transaction; audited for each load that changed zone. Throws
// StorageError, misuse where it was pushed at that time already or the time is not after the last move.
std::vector<MovedLoad> push_line(const Furnace& line, storage::Store& store, storage::Reader& reader,
                                 const storage::PushRow& push, std::int64_t now_us);

// Whether a signal's rise is the push that a person has entered already, within three minutes before it.
bool is_echo(const std::optional<storage::PushRow>& last, std::int64_t at_us);

// When the line was pushed by what its signal says: each time the value rises. A counter that rose by several
// since the reading before was pushed so often in between; when exactly is not known, so evenly.
std::vector<std::int64_t> rises(const std::vector<storage::Reading>& samples,  // ascending
                                std::optional<storage::Reading> before);       // the one before the first

}  // namespace hearthfront::server
