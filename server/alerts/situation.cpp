#include "server/alerts/situation.h"

#include <iterator>

namespace hearthfront::server {

const char* text(Severity severity) {
  switch (severity) {
    case Severity::note:
      return "note";
    case Severity::warning:
      return "warning";
    case Severity::urgent:
      return "urgent";
  }
  return "";
}

Severity severity_from(std::string_view word) {
  if (word == text(Severity::urgent)) return Severity::urgent;
  return word == text(Severity::note) ? Severity::note : Severity::warning;
}

std::string ConditionKey::text() const {
  // A load takes its conditions along when it moves.
  const std::string where = load == 0 ? furnace : std::string();
  return kind + "|" + where + "|" + std::to_string(load) + "|" + subject;
}

void Findings::add(Findings other) {
  judged.insert(judged.end(), std::make_move_iterator(other.judged.begin()),
                std::make_move_iterator(other.judged.end()));
  situations.insert(situations.end(), std::make_move_iterator(other.situations.begin()),
                    std::make_move_iterator(other.situations.end()));
  gone_loads.merge(other.gone_loads);
  gone_furnaces.merge(other.gone_furnaces);
}

}  // namespace hearthfront::server
