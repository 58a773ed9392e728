// What people decide about a channel's readings: which of two values counts, which stretches do not; and
// what was refused.
#include <cmath>

#include "server/api/api.h"
#include "server/api/route_guard.h"
#include "server/base/json_fields.h"
#include "server/base/time_text.h"

namespace hearthfront::server {
namespace {

constexpr int conflicts_shown = 500;
constexpr std::int64_t longest_mask_us = 7LL * 86'400'000'000;

int limit_of(const Request& request, int usual, int most) {
  const auto it = request.query.find("limit");
  if (it == request.query.end()) return usual;
  const int limit = std::atoi(it->second.c_str());
  if (limit < 1 || limit > most)
    throw Problem{422, invalid_request, "The limit cannot be used",
                  "limit: expected a whole number from 1 to " + std::to_string(most) + ".", "limit"};
  return limit;
}

Json mask_json(const storage::MaskRow& row, const std::string& channel) {
  return {{"id", row.id},
          {"channel", channel},
          {"from", format_time(row.from_us)},
          {"to", format_time(row.to_us)},
          {"reason", row.reason},
          {"person", row.person},
          {"at", format_time(row.at_us)},
          {"withdrawn", row.withdrawn},
          {"found_by", "person"}};
}

Json conflicts_json(storage::Reader& reader, std::int64_t channel, int limit) {
  Json list = Json::array();
  for (const storage::Conflict& conflict :
       reader.conflicts(channel, earliest_time_us, latest_time_us, limit)) {
    Json chosen = nullptr;
    if (conflict.choice)
      chosen = {{"value", conflict.choice->value ? Json(*conflict.choice->value) : Json(nullptr)},
                {"person", conflict.choice->person},
                {"at", format_time(conflict.choice->at_us)}};
    list.push_back(
        {{"at", format_time(conflict.time_us)}, {"values", conflict.values}, {"chosen", std::move(chosen)}});
  }
  const auto counts = reader.counts(channel);
  return {{"conflicts", std::move(list)}, {"undecided", counts.conflicts - counts.chosen}};
}

}  // namespace

void Api::add_channel_routes() {
  HttpServer& http = parts_.http;
  http.route("GET", "/api/v1/furnaces/{}/channels/{}/conflicts",
             guarded([this](const Request& r) { return conflicts(r); }));
  http.route("POST", "/api/v1/furnaces/{}/channels/{}/conflicts",
             guarded([this](const Request& r) { return choose(r); }));
  http.route("GET", "/api/v1/furnaces/{}/masks", guarded([this](const Request& r) { return masks(r); }));
  http.route("POST", "/api/v1/furnaces/{}/masks", guarded([this](const Request& r) { return add_mask(r); }));
  http.route("POST", "/api/v1/furnaces/{}/masks/{}/withdraw",
             guarded([this](const Request& r) { return withdraw_mask(r); }));
  http.route("GET", "/api/v1/furnaces/{}/refused", guarded([this](const Request& r) { return refused(r); }));
}

Api::FoundChannel Api::find_channel(const Furnace& furnace, const std::string& name) const {
  const Channel* channel = furnace.channel(name);
  if (!channel)
    throw Problem{404, "unknown-channel", "There is no such channel",
                  "Furnace \"" + furnace.id + "\" has no channel \"" + name + "\".", "channel"};
  return {furnace, *channel, parts_.acceptor.channel_id(furnace.id, name).value()};
}

Response Api::conflicts(const Request& request) {
  const FoundChannel found = find_channel(find_furnace(request), request.path_parameters.at(1));
  auto reader = readers_.take();
  return {200,
          "application/json",
          dumped(conflicts_json(*reader, found.id, limit_of(request, 100, conflicts_shown))),
          {}};
}

Response Api::choose(const Request& request) {
  const FoundChannel found = find_channel(find_furnace(request), request.path_parameters.at(1));
  const Json body = parse_body(request.body);
  JsonFields fields(body, "", invalid_request);
  const std::string person = fields.word("person", 80);
  const std::int64_t now = parts_.clock.now_us();
  std::vector<storage::Choice> choices;
  const Json& list = fields.array("choices", 1, 5000);
  for (std::size_t i = 0; i < list.size(); ++i) {
    JsonFields choice(list[i], "choices[" + std::to_string(i) + "]", invalid_request);
    storage::Choice row{found.id, choice.time("at"), std::nullopt, now, person};
    if (choice.has("value")) row.value = choice.number("value", -1e9, 1e9, "");
    choice.finish();
    choices.push_back(std::move(row));
  }
  fields.finish();
  as_conflict("choice-refused", "The choice does not fit what is stored", [&] {
    parts_.store.choose(
        choices, {now, person, "choose readings", "channel " + found.furnace.id + "/" + found.channel.name,
                  "", dumped(list)});
    return 0;
  });
  auto reader = readers_.take();
  return {200, "application/json", dumped(conflicts_json(*reader, found.id, 100)), {}};
}

Response Api::masks(const Request& request) {
  const Furnace& furnace = find_furnace(request);
  auto reader = readers_.take();
  Json list = Json::array();
  for (const Channel& channel : furnace.channels)
    for (const storage::MaskRow& row :
         reader->masks(find_channel(furnace, channel.name).id, earliest_time_us, latest_time_us))
      list.push_back(mask_json(row, channel.name));
  return {200, "application/json", dumped({{"masks", std::move(list)}}), {}};
}

Response Api::add_mask(const Request& request) {
  const Furnace& furnace = find_furnace(request);
  const Json body = parse_body(request.body);
  JsonFields fields(body, "", invalid_request);
  storage::MaskRow row;
  row.person = fields.word("person", 80);
  const FoundChannel found = find_channel(furnace, fields.word("channel", 60));
  row.channel = found.id;
  row.from_us = fields.time("from");
  row.to_us = fields.time("to");
  row.reason = fields.word("reason", 40);
  fields.finish();
  if (row.reason != "burn-off" && row.reason != "air purge" && row.reason != "calibration" &&
      row.reason != "other")
    fields.fail("reason", "expected burn-off, air purge, calibration or other.");
  if (row.to_us <= row.from_us || row.to_us - row.from_us > longest_mask_us)
    fields.fail("to", "must be later than from, by 7 days at most.");
  row.at_us = parts_.clock.now_us();
  row.id = parts_.store.add_mask(row, {row.at_us, row.person, "mark " + row.reason,
                                       "channel " + furnace.id + "/" + found.channel.name, "", request.body});
  return {201, "application/json", dumped(mask_json(row, found.channel.name)), {}};
}

Response Api::withdraw_mask(const Request& request) {
  const Furnace& furnace = find_furnace(request);
  const Json body = parse_body(request.body);
  JsonFields fields(body, "", invalid_request);
  const std::string person = fields.word("person", 80);
  fields.finish();
  auto reader = readers_.take();
  for (const Channel& channel : furnace.channels) {
    const std::int64_t id = find_channel(furnace, channel.name).id;
    for (storage::MaskRow row : reader->masks(id, earliest_time_us, latest_time_us)) {
      if (std::to_string(row.id) != request.path_parameters.at(1)) continue;
      as_conflict("mask-withdrawn", "It was withdrawn already", [&] {
        parts_.store.withdraw_mask(
            row.id, {parts_.clock.now_us(), person, "withdraw mark",
                     "channel " + furnace.id + "/" + channel.name, dumped(mask_json(row, channel.name)), ""});
        return 0;
      });
      row.withdrawn = true;
      return {200, "application/json", dumped(mask_json(row, channel.name)), {}};
    }
  }
  throw Problem{404, "unknown-mask", "There is no such mark",
                furnace.name + " has no marked stretch \"" + request.path_parameters.at(1) + "\".", ""};
}

Response Api::refused(const Request& request) {
  const Furnace& furnace = find_furnace(request);
  auto reader = readers_.take();
  Json list = Json::array();
  for (const storage::RefusedReading& row : reader->refused(furnace.id, limit_of(request, 50, 500)))
    list.push_back({{"received_at", format_time(row.received_us)},
                    {"channel", row.channel},
                    {"time_text", row.time_text},
                    {"value_text", row.value_text},
                    {"reason", row.reason}});
  return {200, "application/json", dumped({{"refused", std::move(list)}}), {}};
}

}  // namespace hearthfront::server
