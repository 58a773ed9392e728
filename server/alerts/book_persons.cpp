// The book, part two: what people do with alerts. Each change is audited in its transaction.
#include <utility>

#include "server/alerts/alert_book.h"
#include "server/alerts/book_messages.h"
#include "server/base/json_fields.h"
#include "server/base/time_text.h"

namespace hearthfront::server {
namespace {

using storage::AlertRow;
using storage::AlertState;

void refuse_past(const AlertRow& row) {
  if (row.state == AlertState::active) return;
  throw AlertRefusal("alert-past", "The condition has gone: alert " + std::to_string(row.id) +
                                       " is past. Only a note can be added to it.");
}

void audit(PersonStep& step, const std::string& person, const char* action, const Json& after,
           std::int64_t now_us) {
  step.write.audits.push_back(
      {now_us, person, action, "alert " + std::to_string(step.row.id), "", dumped(after)});
}

}  // namespace

PersonStep acknowledge(AlertRow row, const std::string& person, const std::string& note,
                       std::int64_t now_us) {
  refuse_past(row);
  PersonStep step{std::move(row), {}};
  if (step.row.acknowledged_us) {
    if (step.row.acknowledged_by == person && note.empty()) return step;  // pressed twice
    if (step.row.acknowledged_by != person)
      throw AlertRefusal("alert-acknowledged", step.row.acknowledged_by + " acknowledged it at " +
                                                   format_time(*step.row.acknowledged_us) +
                                                   ". Add a note if there is more to say.");
  }
  step.row.acknowledged_us = now_us;
  step.row.acknowledged_by = person;
  step.write.rows = {step.row};
  add_event(step.write, step.row, "acknowledged", note, person, now_us);
  audit(step, person, "acknowledge alert", note.empty() ? Json::object() : Json{{"note", note}}, now_us);
  return step;
}

PersonStep shelve(AlertRow row, const std::string& person, const std::string& reason, std::int64_t until_us,
                  std::int64_t now_us) {
  refuse_past(row);
  PersonStep step{std::move(row), {}};
  step.row.shelved_until_us = until_us;
  step.row.shelved_by = person;
  step.row.shelved_reason = reason;
  step.write.rows = {step.row};
  add_event(step.write, step.row, "shelved", "Until " + format_time(until_us) + ": " + reason, person,
            now_us);
  audit(step, person, "shelve alert", {{"reason", reason}, {"until", format_time(until_us)}}, now_us);
  return step;
}

PersonStep unshelve(const BookParts& parts, AlertRow row, const std::string& person, std::int64_t now_us) {
  if (row.state == AlertState::cleared || !row.shelved_until_us)
    throw AlertRefusal("alert-not-shelved", "Alert " + std::to_string(row.id) + " is not on the shelf.");
  PersonStep step{std::move(row), {}};
  step.row.shelved_until_us.reset();
  const bool asks = step.row.state == AlertState::active && !step.row.acknowledged_us;
  if (asks) {
    step.row.asking_us = step.row.escalated_us = now_us;
    step.row.escalated = 0;
  }
  step.write.rows = {step.row};
  add_event(step.write, step.row, "back from the shelf", "", person, now_us);
  if (asks) tell(parts, step.write, step.row, "back from the shelf", now_us);
  audit(step, person, "unshelve alert", Json::object(), now_us);
  return step;
}

PersonStep note(AlertRow row, const std::string& person, const std::string& text, std::int64_t now_us) {
  PersonStep step{std::move(row), {}};
  add_event(step.write, step.row, "note", text, person, now_us);
  audit(step, person, "note on alert", {{"text", text}}, now_us);
  return step;
}

}  // namespace hearthfront::server
