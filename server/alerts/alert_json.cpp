#include "server/alerts/alert_json.h"

#include "server/base/time_text.h"

namespace hearthfront::server {
namespace {

using storage::AlertRow;

Json word_or_null(const std::string& word) {
  return word.empty() ? Json(nullptr) : Json(word);
}

// Of the other kinds with a load, the subject is a segment or an input.
bool is_about_item(const AlertRow& row) {
  return row.load != 0 &&
         (row.kind == "projected miss" || row.kind == "carbide limit" || row.kind == "model out of range");
}

Json moment_or_null(const std::optional<std::int64_t>& time_us) {
  return time_us ? Json(format_time(*time_us)) : Json(nullptr);
}

}  // namespace

Json alert_summary_json(const AlertRow& row) {
  return {{"id", row.id},
          {"kind", row.kind},
          {"severity", row.severity},
          {"sentence", row.sentence},
          {"advice", word_or_null(row.advice)},
          {"since", format_time(row.since_us)},
          {"acknowledged", row.acknowledged_us.has_value()},
          {"shelved", row.shelved_until_us.has_value()}};
}

Json alert_json(const AlertRow& row, const AlertNames& names,
                const std::optional<storage::DeliveryCounts>& counts) {
  const Furnace* furnace = names.plant.furnace(row.furnace);
  const auto load_name = row.load == 0 ? std::nullopt : names.load_name(row.load);
  const bool active = row.state == storage::AlertState::active;
  Json json{{"id", row.id},
            {"kind", row.kind},
            {"severity", row.severity},
            {"state", active ? "active" : "past"},
            {"furnace", word_or_null(row.furnace)},
            {"furnace_name", furnace ? Json(furnace->name) : word_or_null(row.furnace)},
            {"load", row.load == 0 ? Json(nullptr) : Json(row.load)},
            {"load_name", load_name ? Json(*load_name) : Json(nullptr)},
            {"item", is_about_item(row) ? word_or_null(row.subject) : Json(nullptr)},
            {"subject", word_or_null(row.subject)},
            {"sentence", row.sentence},
            {"advice", word_or_null(row.advice)},
            {"since", format_time(row.since_us)},
            {"raised_at", moment_or_null(row.raised_us)},
            {"last_seen", format_time(row.last_seen_us)},
            {"cleared_at", moment_or_null(row.cleared_us)},
            {"times", row.times},
            {"acknowledged", row.acknowledged_us ? Json{{"person", row.acknowledged_by},
                                                        {"at", format_time(*row.acknowledged_us)}}
                                                 : Json(nullptr)},
            {"shelved", row.shelved_until_us ? Json{{"person", row.shelved_by},
                                                    {"reason", row.shelved_reason},
                                                    {"until", format_time(*row.shelved_until_us)}}
                                             : Json(nullptr)},
            {"escalated", row.escalated > 0}};
  if (counts)
    json["delivery"] = {
        {"waiting", counts->waiting}, {"delivered", counts->delivered}, {"stuck", counts->stuck}};
  return json;
}

std::string alert_payload(const AlertRow& row, std::string_view event, std::string_view key,
                          std::int64_t at_us, const AlertNames& names) {
  return dumped({{"event", event},
                 {"key", key},
                 {"alert", alert_json(row, names, std::nullopt)},
                 {"plant", names.plant.name},
                 {"at", format_time(at_us)}});
}

}  // namespace hearthfront::server
