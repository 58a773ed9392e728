// One reading on its way in, between a decoder (JSON, CSV) and the Acceptor. Plain data. A decoder that
// cannot make sense of an item sets `refusal` and `detail`; such an item is kept with its reason, never
// dropped in silence.
#pragma once

#include <cstdint>
#include <string>
#include <string_view>
#include <vector>

namespace hearthfront::server {

// Why a reading was refused: a closed list, one reason for each refusal. Stored, counted and shown.
enum class Refusal : std::uint8_t {
  none,
  not_an_object,    // JSON: the item is something else
  missing_member,   // JSON: furnace, channel, time or value is absent
  unknown_member,   // JSON: a member that is not ours, perhaps a typing error
  repeated_member,  // JSON: the same member twice, so which one is meant?
  wrong_type,       // JSON: e.g. a number in quotes
  broken_row,       // CSV: a quote not closed, or fewer fields than the columns in use
  bad_time,
  bad_number,  // not a number, or no finite one
  unknown_furnace,
  unknown_channel,
  out_of_range,  // outside the channel's plausible range
  future_time,   // beyond the tolerance for clocks that run ahead
  ancient_time,  // older than the limit: most often a wrong year
};
std::string_view text(Refusal refusal);      // stable words: "future time", ...
const std::vector<Refusal>& all_refusals();  // without none, for counters

struct RawReading {
  std::string furnace, channel;       // as they came
  std::string time_text, value_text;  // as they came, at most 200 bytes; may be empty where decoded well
  std::int64_t time_us = 0;           // microseconds since 1970-01-01 UTC
  double value = 0;                   // in the channel's own unit
  int line = 0;                       // CSV: line of the file, from 1
  Refusal refusal = Refusal::none;
  std::string detail;  // what is wrong and what to do; empty unless refused
};

}  // namespace hearthfront::server
