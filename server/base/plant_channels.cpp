#include <algorithm>

#include "server/base/nearest.h"
#include "server/base/number_text.h"
#include "server/base/plant_parts.h"
#include "server/base/time_format.h"

namespace hearthfront::server {
namespace {

const std::vector<std::string> role_words{
    "temperature", "load_temperature", "probe_temperature", "probe_emf", "carbon_potential", "co", "h2",
    "co2",         "dew_point",        "pressure",          "push"};

std::vector<std::string> units_of(Role role) {
  std::vector<std::string> words;
  for (const Unit unit : {Unit::degc, Unit::degf, Unit::millivolt, Unit::weight_percent, Unit::volume_percent,
                          Unit::hectopascal, Unit::count}) {
    if (unit_fits(role, unit)) words.emplace_back(text(unit));
  }
  return words;
}

struct Range {
  double low, high;
};

// What an instrument can show in a furnace at all; common practice, no source. Given in the first unit
// of the role. A zirconia probe shows about 0 mV in air and up to some 1250 mV in a sooting gas.
Range plausible(Role role, Unit unit) {
  switch (role) {
    case Role::probe_emf:
      return {-50, 1400};
    case Role::carbon_potential:
      return {0, 2};
    case Role::co:
      return {0, 50};
    case Role::h2:
      return {0, 100};
    case Role::co2:
      return {0, 5};
    case Role::dew_point:
      return {convert(-60, Unit::degc, unit), convert(60, Unit::degc, unit)};
    case Role::pressure:
      return {500, 2000};
    case Role::push:
      return {0, 1e9};
    case Role::temperature:
    case Role::load_temperature:
    case Role::probe_temperature:
      break;
  }
  return {convert(-20, Unit::degc, unit), convert(1100, Unit::degc, unit)};
}

bool read_role(ConfigTable& table, Role& into) {
  table.require("role", "it tells the model what the channel measures");
  std::string word;
  if (!table.text("role", word)) return false;
  const std::optional<Role> role = role_from(word);
  if (!role) {
    table.fault("role",
                "expected " + list_of(role_words) + ", got \"" + word + "\"" + suggestion(word, role_words));
    return false;
  }
  into = *role;
  return true;
}

std::optional<Unit> read_unit(ConfigTable& table, std::optional<Role> role) {
  std::string word;
  if (!table.text("unit", word)) return {};
  const std::optional<Unit> unit = unit_from(word);
  if (role && (!unit || !unit_fits(*role, *unit))) {
    table.fault("unit", std::string(text(*role)) + " is given in " + list_of(units_of(*role)) +
                            ", not in \"" + word + "\"");
    return {};
  }
  return unit;
}

void read_chamber(ConfigTable& table, const std::vector<Chamber>& chambers, std::string& into) {
  std::vector<std::string> ids;
  ids.reserve(chambers.size());
  for (const Chamber& each : chambers) ids.push_back(each.id);
  if (ids.empty()) table.fault_here("the furnace has no chamber to put it in");
  if (ids.size() == 1) into = ids.front();
  if (ids.size() > 1) table.require("chamber", "the furnace has several: " + list_of(ids));
  std::string id;
  if (!table.text("chamber", id)) return;
  if (std::find(ids.begin(), ids.end(), id) == ids.end()) {
    table.fault("chamber", "the furnace has no chamber \"" + id + "\"; it has " + list_of(ids));
    return;
  }
  into = id;
}

// Two channels for one input would leave open which of them the model follows.
void check_roles(ConfigTable& table, const Channel& channel, const std::vector<Channel>& before) {
  for (const Channel& other : before) {
    if (channel.role == Role::load_temperature || other.role != channel.role ||
        other.chamber != channel.chamber)
      continue;
    table.fault("role", "channel \"" + other.name + "\" is already the " + std::string(text(channel.role)) +
                            " of chamber \"" + channel.chamber + "\"; one channel for each role and chamber");
  }
}

}  // namespace

Channel read_channel(ConfigTable& table, const Furnace& furnace) {
  Channel channel;
  table.require("name", "readings name the channel by it");
  read_id(table, "name", channel.name);
  const bool known = read_role(table, channel.role);
  read_chamber(table, furnace.chambers, channel.chamber);
  if (known) check_roles(table, channel, furnace.channels);
  const std::optional<Unit> unit = read_unit(table, known ? std::optional(channel.role) : std::nullopt);
  if (known)
    table.require("unit",
                  std::string(text(channel.role)) + " is given in " + list_of(units_of(channel.role)));
  if (known) channel.unit = unit.value_or(*unit_from(units_of(channel.role).front()));

  const Range range = plausible(channel.role, channel.unit);
  channel.low = range.low;
  channel.high = range.high;
  table.number("low", channel.low, -1e6, 1e6);
  table.number("high", channel.high, -1e6, 1e6);
  if (!(channel.low < channel.high)) {
    table.fault(
        table.has("low") ? "low" : "high",
        "low (" + number_text(channel.low) + ") must be below high (" + number_text(channel.high) + ")");
  }

  table.number("expected_interval_s", channel.expected_interval_s, 0.1, 86'400);
  channel.gap_limit_s = std::max(180.0, 5 * channel.expected_interval_s);
  table.number("gap_limit_s", channel.gap_limit_s, 1, 604'800);
  channel.hold_limit_s = std::max(600.0, channel.gap_limit_s);
  table.number("hold_limit_s", channel.hold_limit_s, 1, 604'800);
  if (channel.gap_limit_s < channel.expected_interval_s) {
    table.fault("gap_limit_s", "below expected_interval_s every reading would be followed by a gap");
  }
  if (channel.hold_limit_s < channel.gap_limit_s) {
    table.fault("hold_limit_s", "must be at least gap_limit_s (" + number_text(channel.gap_limit_s) +
                                    "): a value is held only after the gap began");
  }
  return channel;
}

}  // namespace hearthfront::server
