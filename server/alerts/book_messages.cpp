#include "server/alerts/book_messages.h"

#include <cmath>

namespace hearthfront::server {
namespace {

using storage::AlertRow;
using storage::AlertWrite;

// The same words whenever the same message is tried: a target can tell a repeat by it.
std::string message_key(const AlertRow& row, std::string_view event, const std::string& target,
                        std::int64_t now_us) {
  std::string word(event);
  for (char& c : word)
    if (c == ' ') c = '-';
  return "alert-" + std::to_string(row.id) + "-" + word + "-" + std::to_string(now_us) + "-" + target;
}

void queue(const BookParts& parts, AlertWrite& write, const AlertRow& row, std::string_view event,
           const std::string& target, std::int64_t now_us) {
  storage::OutboxRow message;
  message.alert = row.id;
  message.created_us = message.next_try_us = now_us;
  message.target = target;
  message.event = event;
  message.key = message_key(row, event, target, now_us);
  message.payload_json = parts.payload(row, event, message.key, now_us);
  write.outbox.push_back(std::move(message));
}

// When the route's turn comes; empty: at once.
std::optional<std::int64_t> turn_us(const AlertRow& row, const Route& route) {
  const double minutes = route.after_unacknowledged_min.value_or(0);
  if (!(minutes > 0)) return std::nullopt;
  return row.asking_us + std::llround(minutes * static_cast<double>(us_a_minute));
}

}  // namespace

void add_event(AlertWrite& write, const AlertRow& row, std::string_view what, const std::string& text,
               const std::string& person, std::int64_t now_us) {
  write.events.push_back(
      {.id = 0, .alert = row.id, .at_us = now_us, .person = person, .what = std::string(what), .text = text});
}

void tell(const BookParts& parts, AlertWrite& write, const AlertRow& row, std::string_view event,
          std::int64_t now_us) {
  if (row.shelved_until_us) return;
  for (const Route& route : parts.routes(row, event)) {
    const auto turn = turn_us(row, route);
    const bool was_told = turn && row.escalated > 0 && *turn <= row.escalated_us;
    if (!turn || (event == "cleared" && was_told)) queue(parts, write, row, event, route.target, now_us);
  }
}

void escalate(const BookParts& parts, AlertWrite& write, AlertRow& row, std::int64_t now_us) {
  if (row.state != storage::AlertState::active || row.acknowledged_us || row.shelved_until_us) return;
  std::vector<std::string> targets;
  for (const Route& route : parts.routes(row, "escalated")) {
    const auto turn = turn_us(row, route);
    if (turn && *turn > row.escalated_us && *turn <= now_us) targets.push_back(route.target);
  }
  if (targets.empty()) return;
  ++row.escalated;
  row.escalated_us = now_us;
  std::string names;
  for (const std::string& target : targets) {
    names += (names.empty() ? "" : ", ") + target;
    queue(parts, write, row, "escalated", target, now_us);
  }
  add_event(write, row, "escalated", "Nobody acknowledged it; passed on to " + names + ".", "", now_us);
}

}  // namespace hearthfront::server
