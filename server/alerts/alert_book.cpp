#include "server/alerts/alert_book.h"

#include <algorithm>
#include <map>

#include "server/alerts/book_messages.h"

namespace hearthfront::server {
namespace {

using storage::AlertRow;
using storage::AlertState;

// When a condition was last seen is worth a commit only now and then.
constexpr std::int64_t seen_step_us = 10 * us_a_minute;

std::int64_t us(double seconds) {
  return static_cast<std::int64_t>(seconds * 1e6);
}

enum class Sight { there, between, gone, unknown };

struct Look {
  Sight sight = Sight::unknown;
  const Situation* situation = nullptr;
  std::int64_t at_us = 0;
  double clear_hold_s = 0;
};

const Judged* judged_for(const Findings& findings, const AlertRow& row) {
  for (const Judged& judged : findings.judged)
    if (judged.kind == row.kind && judged.load == row.load &&
        (row.load != 0 || judged.furnace == row.furnace) &&
        (!judged.subject || *judged.subject == row.subject))
      return &judged;
  return nullptr;
}

Look look_at(const AlertRow& row, const Findings& findings,
             const std::map<std::string, const Situation*>& by_key, std::int64_t now_us) {
  if (const auto found = by_key.find(row.key); found != by_key.end())
    return {found->second->present ? Sight::there : Sight::between, found->second, found->second->at_us, 0};
  if (row.load != 0 ? findings.gone_loads.contains(row.load) : findings.gone_furnaces.contains(row.furnace))
    return {Sight::gone, nullptr, now_us, 0};
  if (const Judged* judged = judged_for(findings, row))
    return {Sight::gone, nullptr, judged->at_us, judged->clear_hold_s};
  return {};
}

void take_words(AlertRow& row, const Situation& situation) {
  row.sentence = situation.sentence;
  row.advice = situation.advice;
  row.last_seen_us = std::max(row.last_seen_us, situation.at_us);
}

// Asks for a person from now on.
void ask(AlertRow& row, std::int64_t now_us) {
  row.asking_us = row.escalated_us = now_us;
  row.escalated = 0;
}

class Stepper {
 public:
  Stepper(const BookParts& parts, BookStep& step, std::int64_t now_us)
      : parts_(parts), step_(step), now_us_(now_us) {}

  void begin(const Situation& situation) {
    AlertRow row;
    row.id = step_.next_id++;
    row.key = situation.condition.text();
    row.kind = situation.condition.kind;
    row.furnace = situation.condition.furnace;
    row.load = situation.condition.load;
    row.subject = situation.condition.subject;
    row.severity = text(situation.severity);
    row.since_us = std::min(situation.since_us.value_or(situation.at_us), situation.at_us);
    row.last_seen_us = situation.at_us;
    take_words(row, situation);
    raise_if_due(row, situation);
    step_.write.rows.push_back(row);
    step_.open.push_back(std::move(row));
  }

  void follow(AlertRow row, const Look& look) {
    const AlertRow before = row;
    back_from_shelf(row);
    if (look.sight == Sight::there) see(row, *look.situation);
    if (look.sight == Sight::between && row.state != AlertState::resting) row.clearing_us.reset();
    if (look.sight == Sight::gone && row.state == AlertState::waiting) {
      step_.write.removed.push_back(row.id);
      return;
    }
    if (look.sight == Sight::gone && row.state == AlertState::active) clear_if_due(row, look);
    if (row.state == AlertState::resting && !row.shelved_until_us &&
        now_us_ - row.cleared_us.value_or(now_us_) >= parts_.cooling_us)
      row.state = AlertState::cleared;
    escalate(parts_, step_.write, row, now_us_);
    if (worth_storing(before, row)) step_.write.rows.push_back(row);
    if (row.state != AlertState::cleared) step_.open.push_back(std::move(row));
  }

 private:
  static bool worth_storing(AlertRow before, const AlertRow& after) {
    if (before.last_seen_us / seen_step_us != after.last_seen_us / seen_step_us) return true;
    before.last_seen_us = after.last_seen_us;
    before.sentence = after.sentence;
    before.advice = after.advice;
    return !(before == after);
  }

  void raise_if_due(AlertRow& row, const Situation& situation) {
    if (situation.at_us - row.since_us < us(situation.hold_s)) return;
    row.state = AlertState::active;
    row.severity = text(std::max(situation.severity, severity_from(row.severity)));
    row.raised_us = now_us_;
    ask(row, now_us_);
    add_event(step_.write, row, "raised", row.sentence, "", now_us_);
    tell(parts_, step_.write, row, "raised", now_us_);
  }

  void see(AlertRow& row, const Situation& situation) {
    take_words(row, situation);
    row.clearing_us.reset();
    if (row.state == AlertState::waiting) {
      raise_if_due(row, situation);
      return;
    }
    const bool worse = situation.severity > severity_from(row.severity);
    const bool back = row.state == AlertState::resting;
    if (!worse && !back) return;
    if (back) {
      row.state = AlertState::active;
      row.cleared_us.reset();
      ++row.times;
    }
    if (worse) {
      row.severity = text(situation.severity);
      row.acknowledged_us.reset();
      row.acknowledged_by.clear();
    }
    if (!row.acknowledged_us) ask(row, now_us_);
    const char* what = worse ? "worse" : "came back";
    add_event(step_.write, row, what, row.sentence, "", now_us_);
    tell(parts_, step_.write, row, what, now_us_);
  }

  void clear_if_due(AlertRow& row, const Look& look) {
    // A clock that was set back must not make the wait longer.
    row.clearing_us = std::min(row.clearing_us.value_or(look.at_us), look.at_us);
    if (look.at_us - *row.clearing_us < us(look.clear_hold_s)) return;
    row.state = AlertState::resting;
    row.cleared_us = now_us_;
    add_event(step_.write, row, "cleared", "", "", now_us_);
    tell(parts_, step_.write, row, "cleared", now_us_);
  }

  void back_from_shelf(AlertRow& row) {
    if (!row.shelved_until_us || *row.shelved_until_us > now_us_) return;
    row.shelved_until_us.reset();
    add_event(step_.write, row, "back from the shelf", "Its shelf time is over.", "", now_us_);
    if (row.state != AlertState::active || row.acknowledged_us) return;
    ask(row, now_us_);
    tell(parts_, step_.write, row, "back from the shelf", now_us_);
  }

  const BookParts& parts_;
  BookStep& step_;
  const std::int64_t now_us_;
};

}  // namespace

BookStep look(const BookParts& parts, std::vector<AlertRow> open, std::int64_t next_id,
              const Findings& findings, std::int64_t now_us) {
  BookStep step;
  step.next_id = next_id;
  std::map<std::string, const Situation*> by_key;
  for (const Situation& situation : findings.situations)
    by_key.emplace(situation.condition.text(), &situation);
  Stepper stepper(parts, step, now_us);
  for (AlertRow& row : open) {
    const Look seen = look_at(row, findings, by_key, now_us);
    by_key.erase(row.key);
    stepper.follow(std::move(row), seen);
  }
  for (const auto& [key, situation] : by_key)
    if (situation->present) stepper.begin(*situation);
  return step;
}

}  // namespace hearthfront::server
