// Who is told, and when a failed message is tried again. Rules of our own: common practice, no source.
#include <doctest/doctest.h>

#include <filesystem>
#include <fstream>
#include <set>
#include <sstream>

#include "server/delivery/backoff.h"
#include "server/delivery/routing.h"
#include "server/delivery/target_worker.h"
#include "server/delivery/webhook.h"

using namespace hearthfront::server;
namespace storage = hearthfront::storage;

namespace {

storage::AlertRow alert(const std::string& furnace, const std::string& kind, const std::string& severity,
                        const std::string& subject = "") {
  storage::AlertRow row;
  row.furnace = furnace;
  row.kind = kind;
  row.severity = severity;
  row.subject = subject;
  return row;
}

storage::OutboxRow waiting(std::int64_t id, std::int64_t of_alert, std::int64_t next_try_us) {
  storage::OutboxRow row;
  row.id = id;
  row.alert = of_alert;
  row.next_try_us = next_try_us;
  return row;
}

}  // namespace

TEST_CASE("a target is told by furnace, kind and severity") {
  DeliveryTarget all;
  all.name = "all";
  DeliveryTarget pit = all;
  pit.furnaces = {"pit-2", "pit-3"};
  DeliveryTarget gaps = all;
  gaps.kinds = {"gap"};
  DeliveryTarget urgent = all;
  urgent.least_severity = "urgent";
  DeliveryTarget warning = all;
  warning.least_severity = "warning";
  struct Row {
    storage::AlertRow row;
    bool to_all, to_pit, to_gaps, to_warning, to_urgent;
  };
  const Row table[] = {
      {alert("pit-2", "no reading", "warning"), true, true, false, true, false},
      {alert("pit-3", "gap", "note"), true, true, true, false, false},
      {alert("batch-4", "projected miss", "urgent"), true, false, false, true, true},
      {alert("", "disk", "urgent"), true, false, false, true, true},  // of no furnace
      {alert("", "delivery stuck", "warning", "pager"), true, false, false, true, false},
  };
  for (const Row& each : table) {
    CAPTURE(each.row.kind);
    CHECK(wants(all, each.row) == each.to_all);
    CHECK(wants(pit, each.row) == each.to_pit);
    CHECK(wants(gaps, each.row) == each.to_gaps);
    CHECK(wants(warning, each.row) == each.to_warning);
    CHECK(wants(urgent, each.row) == each.to_urgent);
  }
  // What cannot be delivered to it is no news for it.
  CHECK_FALSE(wants(all, alert("", "delivery stuck", "warning", "all")));
}

TEST_CASE("the book of alerts gets the targets with their patience") {
  std::vector<DeliveryTarget> targets(3);
  targets[0].name = "now";
  targets[1].name = "later";
  targets[1].after_unacknowledged_min = 15;
  targets[2].name = "never";
  targets[2].kinds = {"disk"};
  const auto routes = routes_of(targets, alert("pit-2", "gap", "warning"));
  REQUIRE(routes.size() == 2);
  CHECK(routes[0].target == "now");
  CHECK_FALSE(routes[0].after_unacknowledged_min.has_value());
  CHECK(routes[1].target == "later");
  CHECK(routes[1].after_unacknowledged_min == 15.0);
}

TEST_CASE("the kinds that a target may name are those that the rules raise") {
  const char* const places[] = {
      "of_furnace(furnace, \"",    "judged(furnace, \"", "of_load(view, \"", "judged_load(view, \"",
      "judge(findings, state, \"", "* kind = \"",        "* kind : {\""};
  std::set<std::string> raised;
  for (const auto& entry :
       std::filesystem::directory_iterator(std::string(HF_SOURCE_DIR) + "/server/alerts")) {
    if (!entry.path().filename().string().starts_with("rules_")) continue;
    std::stringstream text;
    text << std::ifstream(entry.path()).rdbuf();
    const std::string source = text.str();
    for (const std::string place : places)
      for (std::size_t at = source.find(place); at != std::string::npos; at = source.find(place, at + 1)) {
        const std::size_t start = at + place.size();
        raised.insert(source.substr(start, source.find('"', start) - start));
      }
  }
  CHECK(raised == std::set<std::string>(alert_kinds().begin(), alert_kinds().end()));
}

TEST_CASE("what a target wants is one sentence") {
  DeliveryTarget target;
  CHECK(routes_sentence(target) == "Every alert, whole plant, at once.");
  target.furnaces = {"pit-2", "pit-3"};
  target.kinds = {"gap"};
  target.least_severity = "warning";
  target.after_unacknowledged_min = 15;
  CHECK(routes_sentence(target) ==
        "Warnings and urgent alerts of the kinds gap, furnaces pit-2, pit-3, once nobody has acknowledged "
        "for 15 min.");
}

TEST_CASE("tries are 10 s apart, then twice as far each time, up to 15 min") {
  const double expected_s[] = {10, 20, 40, 80, 160, 320, 640, 900, 900};
  for (int attempts = 1; attempts <= 9; ++attempts) {
    const double plain = expected_s[attempts - 1];
    CHECK(wait_after_s(attempts, 0) == plain);
    CHECK(wait_after_s(attempts, 0.999) > plain * 1.2);
    CHECK(wait_after_s(attempts, 0.999) < plain * 1.25);
  }
  CHECK(wait_after_s(1'000'000, 0) == 900);
  double all = 0;  // 20 tries reach over a shift's first half at least
  for (int attempts = 1; attempts < 20; ++attempts) all += wait_after_s(attempts, 0);
  CHECK(all > 3 * 3600);
}

TEST_CASE("the next message is the one that is due first, but of each alert the oldest") {
  const std::int64_t now = 1'000'000'000'000, s = 1'000'000;
  CHECK_FALSE(next_message({}, now, 1).has_value());
  const auto first =
      next_message({waiting(1, 7, now + 20 * s), waiting(2, 7, now), waiting(3, 8, now + 5 * s)}, now, 1);
  REQUIRE(first);
  CHECK(first->index == 2);  // 2 waits for 1
  CHECK(first->wait_s == doctest::Approx(5));
  const auto due = next_message({waiting(1, 7, now + 20 * s), waiting(2, 8, now - s)}, now, 1);
  REQUIRE(due);
  CHECK(due->index == 1);
  CHECK(due->wait_s == 0);
  // The demo's clock runs 60 times as fast; waits are real.
  CHECK(next_message({waiting(1, 7, now + 600 * s)}, now, 60)->wait_s == doctest::Approx(10));
  // The host's clock was set back by a day: no message waits for that.
  CHECK(next_message({waiting(1, 7, now + 86'400 * s)}, now, 1)->wait_s == 0);
}

TEST_CASE("what an HTTP status means") {
  // RFC 9110 15: 2xx successful, 5xx the server's fault; 408 and 429 (RFC 6585 4) and 425 (RFC 8470 5.2) ask
  // for another try.
  for (const long status : {200, 201, 202, 204}) CHECK(outcome_of_status(status) == SendOutcome::delivered);
  for (const long status : {408, 425, 429, 500, 502, 503, 504})
    CHECK(outcome_of_status(status) == SendOutcome::again);
  for (const long status : {300, 301, 302, 307, 308, 400, 401, 403, 404, 410, 413, 422})
    CHECK(outcome_of_status(status) == SendOutcome::refused);
}
