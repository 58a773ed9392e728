#include "server/ingest/raw_reading.h"

namespace hearthfront::server {

std::string_view text(Refusal refusal) {
  switch (refusal) {
    case Refusal::none:
      return "none";
    case Refusal::not_an_object:
      return "not an object";
    case Refusal::missing_member:
      return "missing member";
    case Refusal::unknown_member:
      return "unknown member";
    case Refusal::repeated_member:
      return "repeated member";
    case Refusal::wrong_type:
      return "wrong type";
    case Refusal::broken_row:
      return "broken row";
    case Refusal::bad_time:
      return "bad time";
    case Refusal::bad_number:
      return "bad number";
    case Refusal::unknown_furnace:
      return "unknown furnace";
    case Refusal::unknown_channel:
      return "unknown channel";
    case Refusal::out_of_range:
      return "out of range";
    case Refusal::future_time:
      return "future time";
    case Refusal::ancient_time:
      return "ancient time";
  }
  return "none";
}

const std::vector<Refusal>& all_refusals() {
  static const std::vector<Refusal> all{
      Refusal::not_an_object,   Refusal::missing_member,  Refusal::unknown_member, Refusal::repeated_member,
      Refusal::wrong_type,      Refusal::broken_row,      Refusal::bad_time,       Refusal::bad_number,
      Refusal::unknown_furnace, Refusal::unknown_channel, Refusal::out_of_range,   Refusal::future_time,
      Refusal::ancient_time};
  return all;
}

}  // namespace hearthfront::server
