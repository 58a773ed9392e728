// Hand-made views and a plant for the tests of alerts. Invented figures. Nothing of the model runs here.
#pragma once

#include <functional>
#include <memory>
#include <string>
#include <vector>

#include "live_support.h"
#include "server/alerts/alert_book.h"
#include "server/alerts/rules.h"

namespace hearthfront::server::test {

inline constexpr std::int64_t minute_us = 60'000'000;

// A load of live_support.h `minute` minutes after its start, live and measured, without outlook.
struct HandMade {
  std::shared_ptr<const LoadDefinition> load = definition();
  LoadView view;

  explicit HandMade(double minute = 30) {
    view.row.id = 7;
    view.row.name = "1";
    view.row.furnace = "f1";
    view.row.started_us = load->started_us;
    view.result.definition = load;
    view.result.items.resize(load->items.size());
    view.condition = Condition::live;
    view.temperature = {930, Basis::measured, 10};
    view.carbon_potential = {1.1, Basis::measured, 10};
    view.segment.minutes_left = 90;
    view.minutes_left = 150;
    at(minute);
  }
  HandMade& at(double minute) {
    view.result.state_us = load->started_us + static_cast<std::int64_t>(minute * 60e6);
    view.data_us = view.now_us = view.result.state_us;
    return *this;
  }
  // Both items end at these figures, `left_min` from now.
  HandMade& outlook(double depth_mm, double chance, double offered = 0.9, double left_min = 150) {
    LoadOutlook outlook;
    outlook.at_us = view.result.state_us;
    outlook.ends_us = outlook.at_us + static_cast<std::int64_t>(left_min * 60e6);
    outlook.offered_joint_chance = offered;
    outlook.now.items.resize(load->items.size());
    outlook.ahead.end.items.resize(load->items.size());
    outlook.ahead.end.joint_chance = chance;
    for (solver::ItemOutlook& item : outlook.ahead.end.items) {
      item.case_depth_m = {depth_mm * 0.9e-3, depth_mm * 1e-3, depth_mm * 1.1e-3};
      item.joint_chance = chance;
    }
    view.outlook = std::make_shared<const LoadOutlook>(outlook);
    return *this;
  }
  LoadViews views() const { return {std::make_shared<const LoadView>(view)}; }
};

// The book with rows kept as the keeper keeps them, and everything that was ever written.
struct BookBench {
  BookParts parts{[](const storage::AlertRow&, std::string_view) {
                    return std::vector<Route>{{"phone", {}}};
                  },
                  [](const storage::AlertRow& row, std::string_view event, std::string_view, std::int64_t) {
                    return std::to_string(row.id) + " " + std::string(event);
                  },
                  60 * minute_us};
  std::vector<storage::AlertRow> open;
  std::int64_t next_id = 1;
  storage::AlertWrite written;
  std::size_t commits = 0;

  void take(storage::AlertWrite write) {
    if (!write.empty()) ++commits;
    const auto append = [](auto& to, auto& from) { to.insert(to.end(), from.begin(), from.end()); };
    append(written.rows, write.rows);
    append(written.removed, write.removed);
    append(written.events, write.events);
    append(written.outbox, write.outbox);
    append(written.audits, write.audits);
  }
  void look_at(const Findings& findings, std::int64_t now_us) {
    BookStep step = look(parts, open, next_id, findings, now_us);
    open = std::move(step.open);
    next_id = step.next_id;
    take(std::move(step.write));
  }
  std::vector<std::string> messages() const {
    std::vector<std::string> list;
    for (const auto& row : written.outbox) list.push_back(row.payload_json + " to " + row.target);
    return list;
  }
  std::vector<std::string> events() const {
    std::vector<std::string> list;
    for (const auto& event : written.events) list.push_back(event.what);
    return list;
  }
  std::size_t active() const {
    std::size_t count = 0;
    for (const auto& row : open) count += row.state == storage::AlertState::active ? 1 : 0;
    return count;
  }
};

// A condition "gap" of one furnace at a minute, present or between its limits; gone where neither.
enum class Is { there, between, gone, unknown };
inline Findings gap(Is is, double minute, double hold_min = 5, double clear_min = 10,
                    Severity severity = Severity::warning) {
  Findings findings;
  const auto at_us = static_cast<std::int64_t>(minute * 60e6);
  if (is == Is::unknown) return findings;
  findings.judged.push_back({"gap", "f1", 0, std::nullopt, at_us, clear_min * 60});
  if (is == Is::gone) return findings;
  Situation situation;
  situation.condition = {"gap", "f1", 0, ""};
  situation.severity = severity;
  situation.present = is == Is::there;
  situation.sentence = "minute " + std::to_string(minute);
  situation.at_us = at_us;
  situation.hold_s = hold_min * 60;
  findings.situations.push_back(situation);
  return findings;
}

}  // namespace hearthfront::server::test
