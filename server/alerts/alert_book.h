// The rules of alerting, without clock, thread or store: what becomes of the open alerts when the conditions
// are looked at, and when a person does something. Pure functions; the keeper stores what they say.
//
// waiting -> active after the rule's hold; active -> resting after its clear hold; resting -> active when the
// condition comes back, -> cleared when the cooling time is over. Why resting: a condition that comes and
// goes around its limit shall be one alert, counted in `times`, and yet nobody shall see it as there while it
// is not; so a resting alert is shown as past, and is not yet out of reach.
//
// While an alert is open its severity only rises; when it does, an acknowledgement no longer holds: it was
// for less. One that comes back stays acknowledged. A shelved alert sends nothing, and rests until its shelf
// time is over, so that it cannot come back under a new number before.
#pragma once

#include <cstdint>
#include <stdexcept>
#include <string>
#include <vector>

#include "server/alerts/routing.h"
#include "server/alerts/situation.h"
#include "storage/store.h"

namespace hearthfront::server {

struct BookParts {
  RouteFunction routes;
  PayloadFunction payload;
  std::int64_t cooling_us = 0;  // clock
};

struct BookStep {
  std::vector<storage::AlertRow> open;  // all but the cleared, as they are from now on
  std::int64_t next_id = 1;
  storage::AlertWrite write;  // what is to be stored; empty: nothing worth a commit
};

// `now_us`: the daemon's clock. Texts and last_seen of rows change also where nothing is to be stored.
BookStep look(const BookParts& parts, std::vector<storage::AlertRow> open, std::int64_t next_id,
              const Findings& findings, std::int64_t now_us);

// Why a person's request does not fit the alert; `type` is that of the problem, what() says what is so.
class AlertRefusal : public std::runtime_error {
 public:
  AlertRefusal(std::string type_word, const std::string& what)
      : std::runtime_error(what), type(std::move(type_word)) {}
  std::string type;
};

struct PersonStep {
  storage::AlertRow row;
  storage::AlertWrite write;  // empty: it was so already
};

// Throw AlertRefusal: not active; acknowledged by somebody else; not shelved. Names and texts are not empty,
// except `note`.
PersonStep acknowledge(storage::AlertRow row, const std::string& person, const std::string& note,
                       std::int64_t now_us);
PersonStep shelve(storage::AlertRow row, const std::string& person, const std::string& reason,
                  std::int64_t until_us, std::int64_t now_us);
PersonStep unshelve(const BookParts& parts, storage::AlertRow row, const std::string& person,
                    std::int64_t now_us);
PersonStep note(storage::AlertRow row, const std::string& person, const std::string& text,
                std::int64_t now_us);

}  // namespace hearthfront::server
