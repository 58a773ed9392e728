#include "server/delivery/routing.h"

#include <algorithm>

namespace hearthfront::server {
namespace {

int rank(const std::string& severity) {
  return severity == "urgent" ? 2 : severity == "warning" ? 1 : 0;
}

bool holds(const std::vector<std::string>& list, const std::string& word) {
  return list.empty() || std::find(list.begin(), list.end(), word) != list.end();
}

std::string joined(const std::vector<std::string>& words) {
  std::string text;
  for (const std::string& word : words) text += (text.empty() ? "" : ", ") + word;
  return text;
}

}  // namespace

bool wants(const DeliveryTarget& target, const storage::AlertRow& alert) {
  if (alert.kind == "delivery stuck" && alert.subject == target.name) return false;
  return rank(alert.severity) >= rank(target.least_severity) && holds(target.furnaces, alert.furnace) &&
         holds(target.kinds, alert.kind);
}

std::vector<Route> routes_of(const std::vector<DeliveryTarget>& targets, const storage::AlertRow& alert) {
  std::vector<Route> routes;
  for (const DeliveryTarget& target : targets) {
    if (!wants(target, alert)) continue;
    Route route{target.name, std::nullopt};
    if (target.after_unacknowledged_min > 0) route.after_unacknowledged_min = target.after_unacknowledged_min;
    routes.push_back(std::move(route));
  }
  return routes;
}

const std::vector<std::string>& alert_kinds() {
  static const std::vector<std::string> kinds{
      "projected miss",      "segment due", "off recipe",  "carbide limit",    "model out of range",
      "no reading",          "gap",         "sooting gas", "sources disagree", "stuck reading",
      "implausible reading", "disk",        "clock",       "delivery stuck"};
  return kinds;
}

std::string routes_sentence(const DeliveryTarget& target) {
  const char* const severities[] = {"Every alert", "Warnings and urgent alerts", "Urgent alerts"};
  std::string text = severities[rank(target.least_severity)];
  if (!target.kinds.empty()) text += " of the kinds " + joined(target.kinds);
  text += target.furnaces.empty() ? ", whole plant" : ", furnaces " + joined(target.furnaces);
  if (target.after_unacknowledged_min == 0) return text + ", at once.";
  return text + ", once nobody has acknowledged for " + std::to_string(target.after_unacknowledged_min) +
         " min.";
}

}  // namespace hearthfront::server
