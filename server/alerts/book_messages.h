// Which messages an event of an alert makes. Internal to the book.
#pragma once

#include <cstdint>
#include <string>
#include <string_view>

#include "server/alerts/alert_book.h"

namespace hearthfront::server {

inline constexpr std::int64_t us_a_minute = 60'000'000;

// Notes what happened.
void add_event(storage::AlertWrite& write, const storage::AlertRow& row, std::string_view what,
               const std::string& text, const std::string& person, std::int64_t now_us);
// Queues messages to those who are told at once and, of "cleared", to those it was passed on to.
void tell(const BookParts& parts, storage::AlertWrite& write, const storage::AlertRow& row,
          std::string_view event, std::int64_t now_us);
// Passes on what nobody has acknowledged in time; changes `row` where it does.
void escalate(const BookParts& parts, storage::AlertWrite& write, storage::AlertRow& row,
              std::int64_t now_us);

}  // namespace hearthfront::server
