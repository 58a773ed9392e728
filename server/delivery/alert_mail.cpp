#include "server/delivery/alert_mail.h"

#include "server/base/json_fields.h"

namespace hearthfront::server {
namespace {

constexpr const char* care =
    "Advice only: hearthfront is no safety function. The furnace's own alarms, local codes and licensed "
    "practice come "
    "first; a case is released by measurement, not by prediction.\n";

std::string word(const Json& alert, const char* name) {
  const auto found = alert.find(name);
  return found != alert.end() && found->is_string() ? found->get<std::string>() : "";
}

// "Pit 2, load 2291, item A"
std::string place(const Json& alert) {
  std::string where = word(alert, "furnace_name");
  if (where.empty()) where = word(alert, "furnace");
  const auto add = [&](const std::string& more) {
    if (!more.empty()) where += (where.empty() ? "" : ", ") + more;
  };
  if (const std::string load = word(alert, "load_name"); !load.empty()) add("load " + load);
  if (const std::string item = word(alert, "item"); !item.empty()) add("item " + item);
  return where;
}

// How the event of an alert of this severity is called at the beginning of a subject.
std::string headline(const std::string& event, const std::string& severity) {
  if (event == "cleared") return "Over";
  if (event == "test") return "Test";
  std::string first = severity.empty() ? "Alert" : severity;
  if (first[0] >= 'a' && first[0] <= 'z') first[0] = static_cast<char>(first[0] - 'a' + 'A');
  if (event == "came back") return first + ", again";
  if (event == "worse") return first + ", worse than before";
  if (event == "escalated") return first + ", acknowledged by nobody";
  return first;
}

}  // namespace

AlertMail alert_mail(const std::string& payload_json) {
  const Json payload = Json::parse(payload_json, nullptr, false);
  if (!payload.is_object()) return {"Alert", payload_json + "\n\n" + care};
  const auto inner = payload.find("alert");
  const Json& alert = inner != payload.end() && inner->is_object() ? *inner : payload;
  const std::string event = word(payload, "event");
  const std::string where = place(alert), sentence = word(alert, "sentence"), advice = word(alert, "advice");

  AlertMail mail;
  mail.subject =
      headline(event, word(alert, "severity")) + ": " + (where.empty() ? "" : where + ": ") + sentence;
  const auto line = [&](const char* title, const std::string& text) {
    if (!text.empty()) mail.body += title + text + "\n";
  };
  line("", sentence);
  mail.body += "\n";
  line("Where: ", where);
  line("Since: ", word(alert, "since"));
  line("Over since: ", word(alert, "cleared_at"));
  if (event != "cleared") line("What to do: ", advice);
  if (event == "escalated")
    line("", "It was passed on to you because nobody acknowledged it on the dashboard.");
  mail.body += "\n";
  mail.body += care;
  return mail;
}

}  // namespace hearthfront::server
