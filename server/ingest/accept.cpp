#include "server/ingest/accept.h"

#include <algorithm>
#include <cmath>

#include "server/base/log.h"
#include "server/base/nearest.h"
#include "server/base/number_text.h"
#include "server/base/time_text.h"
#include "server/base/utf8.h"
#include "server/ingest/storage_problem.h"
#include "storage/store.h"

namespace hearthfront::server {
namespace {

ReadingOutcome refused(Refusal refusal, std::string detail) {
  return {Disposition::refused, refusal, std::move(detail)};
}

Disposition disposition_of(storage::Taken taken) {
  switch (taken) {
    case storage::Taken::stored:
      return Disposition::stored;
    case storage::Taken::duplicate:
      return Disposition::duplicate;
    case storage::Taken::conflict:
      return Disposition::conflict;
  }
  return Disposition::stored;
}

std::string with_unit(double value, Unit unit) {
  return number_text(value) + " " + std::string(text(unit));
}

// Whole seconds, minutes, hours or days, whichever a person would say.
std::string span_text(double seconds) {
  if (seconds < 120) return number_text(std::round(seconds)) + " s";
  if (seconds < 7200) return number_text(std::round(seconds / 60)) + " min";
  if (seconds < 172'800) return number_text(std::round(seconds / 3600)) + " h";
  return number_text(std::round(seconds / 86'400)) + " days";
}

storage::RefusedReading record_of(const RawReading& item, const ReadingOutcome& outcome,
                                  std::int64_t now_us) {
  storage::RefusedReading record;
  record.received_us = now_us;
  record.furnace = clean_text(item.furnace);
  record.channel = clean_text(item.channel);
  // A decoder may leave the texts out where it could read them; these are the same moment and value.
  const bool decoded = item.refusal == Refusal::none;
  record.time_text = item.time_text.empty() && decoded ? format_time(item.time_us) : item.time_text;
  record.value_text = item.value_text.empty() && decoded ? number_text(item.value) : item.value_text;
  record.reason = text(outcome.refusal);
  return record;
}

void tally(Accepted& accepted) {
  for (const ReadingOutcome& outcome : accepted.outcomes) {
    switch (outcome.disposition) {
      case Disposition::stored:
        ++accepted.stored;
        break;
      case Disposition::duplicate:
        ++accepted.duplicate;
        break;
      case Disposition::conflict:
        ++accepted.conflict;
        break;
      case Disposition::refused:
        ++accepted.refused;
        break;
    }
  }
}

}  // namespace

std::string_view text(Disposition disposition) {
  switch (disposition) {
    case Disposition::stored:
      return "stored";
    case Disposition::duplicate:
      return "duplicate";
    case Disposition::conflict:
      return "conflict";
    case Disposition::refused:
      return "refused";
  }
  return "refused";
}

Acceptor::Acceptor(const Plant& plant, const Clock& clock, storage::Store& store,
                   const Settings::Ingest& limits)
    : plant_(plant), clock_(clock), store_(store), limits_(limits) {
  for (const Furnace& furnace : plant.furnaces) {
    auto& channels = known_[furnace.id];
    for (const Channel& channel : furnace.channels) {
      channels[channel.name] = {store.register_channel(furnace.id, channel.name), &channel};
    }
  }
}

const Acceptor::Known* Acceptor::find(std::string_view furnace, std::string_view channel) const {
  const auto channels = known_.find(furnace);
  if (channels == known_.end()) return nullptr;
  const auto found = channels->second.find(channel);
  return found == channels->second.end() ? nullptr : &found->second;
}

std::optional<std::int64_t> Acceptor::channel_id(std::string_view furnace, std::string_view channel) const {
  const Known* known = find(furnace, channel);
  return known == nullptr ? std::nullopt : std::optional(known->id);
}

ReadingOutcome Acceptor::check(const RawReading& item, std::int64_t now_us, const Known*& known) const {
  if (item.refusal != Refusal::none) return refused(item.refusal, item.detail);
  const Furnace* furnace = plant_.furnace(item.furnace);
  if (furnace == nullptr) {
    std::vector<std::string> ids;
    for (const Furnace& each : plant_.furnaces) ids.push_back(each.id);
    return refused(Refusal::unknown_furnace, "the plant file has no furnace \"" +
                                                 clean_text(item.furnace, 60) + "\"" +
                                                 suggestion(item.furnace, ids));
  }
  known = find(item.furnace, item.channel);
  if (known == nullptr) {
    std::vector<std::string> names;
    for (const Channel& each : furnace->channels) names.push_back(each.name);
    return refused(Refusal::unknown_channel, "furnace \"" + furnace->id + "\" has no channel \"" +
                                                 clean_text(item.channel, 60) + "\"" +
                                                 suggestion(item.channel, names));
  }
  const Channel& channel = *known->channel;
  if (!std::isfinite(item.value)) return refused(Refusal::bad_number, "the value is not finite");
  if (item.value < channel.low || item.value > channel.high) {
    return refused(Refusal::out_of_range, with_unit(item.value, channel.unit) +
                                              " is outside the plausible range " + number_text(channel.low) +
                                              " to " + with_unit(channel.high, channel.unit) +
                                              " of channel \"" + channel.name + "\"");
  }
  const double ahead_s = static_cast<double>(item.time_us - now_us) / 1e6;
  if (ahead_s > limits_.future_tolerance_s) {
    return refused(Refusal::future_time,
                   format_time(item.time_us) + " is " + span_text(ahead_s) +
                       " ahead of the daemon's clock: check clock and time zone of the logger");
  }
  if (-ahead_s > limits_.past_limit_days * 86'400) {
    return refused(Refusal::ancient_time, format_time(item.time_us) + " is older than " +
                                              number_text(limits_.past_limit_days) +
                                              " days (past_limit_days): is the year right?");
  }
  return {};
}

ReadingOutcome Acceptor::would_be(const RawReading& item) const {
  const Known* known = nullptr;
  return check(item, clock_.now_us(), known);
}

void Acceptor::append(const std::vector<RawReading>& items, std::size_t from, std::size_t to,
                      Accepted& accepted) const {
  const std::int64_t now_us = clock_.now_us();
  std::vector<storage::Reading> readings;
  std::vector<storage::RefusedReading> records;
  std::vector<std::size_t> places;  // of the readings among the outcomes
  for (std::size_t i = from; i < to; ++i) {
    const Known* known = nullptr;
    ReadingOutcome outcome = check(items[i], now_us, known);
    if (outcome.disposition == Disposition::refused) {
      records.push_back(record_of(items[i], outcome, now_us));
    } else {
      readings.push_back({known->id, items[i].time_us, items[i].value});
      places.push_back(accepted.outcomes.size());
    }
    accepted.outcomes.push_back(std::move(outcome));
  }
  const std::vector<storage::Taken> taken = store_.append(std::move(readings), std::move(records));
  for (std::size_t i = 0; i < places.size(); ++i) {
    accepted.outcomes[places[i]].disposition = disposition_of(taken.at(i));
  }
}

Accepted Acceptor::accept(const std::vector<RawReading>& items) const {
  Accepted accepted;
  std::size_t from = 0;
  try {
    for (; from < items.size(); from += std::min(limits_.max_batch, items.size() - from)) {
      append(items, from, from + std::min(limits_.max_batch, items.size() - from), accepted);
    }
  } catch (const storage::StorageError& error) {
    Problem problem = storage_problem(error);
    if (error.fault == storage::StorageFault::busy || error.fault == storage::StorageFault::closing) {
      log_info("readings turned away", {{"reason", problem.type}});
    } else {
      log_error("readings not stored", {{"reason", problem.type}, {"cause", error.what()}});
    }
    if (from > 0) {
      problem.detail += " The first " + std::to_string(from) +
                        " readings of this request are taken care of; sending all again is safe.";
    }
    throw Problem(std::move(problem));
  }
  tally(accepted);
  return accepted;
}

}  // namespace hearthfront::server
