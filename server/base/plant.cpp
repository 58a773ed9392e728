#include "server/base/plant.h"

#include <array>
#include <stdexcept>

namespace hearthfront::server {
namespace {

constexpr std::array<std::pair<Role, std::string_view>, 11> roles{{
    {Role::temperature, "temperature"},
    {Role::load_temperature, "load_temperature"},
    {Role::probe_temperature, "probe_temperature"},
    {Role::probe_emf, "probe_emf"},
    {Role::carbon_potential, "carbon_potential"},
    {Role::co, "co"},
    {Role::h2, "h2"},
    {Role::co2, "co2"},
    {Role::dew_point, "dew_point"},
    {Role::pressure, "pressure"},
    {Role::push, "push"},
}};

constexpr std::array<std::pair<Unit, std::string_view>, 7> units{{
    {Unit::degc, "degC"},
    {Unit::degf, "degF"},
    {Unit::millivolt, "mV"},
    {Unit::weight_percent, "wt_pct"},
    {Unit::volume_percent, "vol_pct"},
    {Unit::hectopascal, "hPa"},
    {Unit::count, "count"},
}};

template <typename Table, typename Value>
std::string_view word_of(const Table& table, Value value) {
  for (const auto& [known, word] : table) {
    if (known == value) return word;
  }
  throw std::logic_error("plant: a role or unit without a word");
}

template <typename Value, typename Table>
std::optional<Value> value_of(const Table& table, std::string_view word) {
  for (const auto& [value, known] : table) {
    if (known == word) return value;
  }
  return {};
}

template <typename List, typename Key>
const typename List::value_type* find(const List& list, Key&& key, std::string_view wanted) {
  for (const auto& each : list) {
    if (key(each) == wanted) return &each;
  }
  return nullptr;
}

}  // namespace

std::string_view text(Role role) {
  return word_of(roles, role);
}
std::string_view text(Unit unit) {
  return word_of(units, unit);
}
std::optional<Role> role_from(std::string_view word) {
  return value_of<Role>(roles, word);
}
std::optional<Unit> unit_from(std::string_view word) {
  return value_of<Unit>(units, word);
}

bool unit_fits(Role role, Unit unit) {
  switch (role) {
    case Role::temperature:
    case Role::load_temperature:
    case Role::probe_temperature:
    case Role::dew_point:
      return unit == Unit::degc || unit == Unit::degf;
    case Role::probe_emf:
      return unit == Unit::millivolt;
    case Role::carbon_potential:
      return unit == Unit::weight_percent;
    case Role::co:
    case Role::h2:
    case Role::co2:
      return unit == Unit::volume_percent;
    case Role::pressure:
      return unit == Unit::hectopascal;
    case Role::push:
      return unit == Unit::count;
  }
  return false;
}

double convert(double value, Unit from, Unit to) {
  if (from == to) return value;
  if (from == Unit::degf && to == Unit::degc) return (value - 32.0) / 1.8;
  if (from == Unit::degc && to == Unit::degf) return value * 1.8 + 32.0;
  throw std::logic_error("convert: no way from " + std::string(text(from)) + " to " + std::string(text(to)));
}

std::string_view text(CarbonSource source) {
  switch (source) {
    case CarbonSource::logged:
      return "logged";
    case CarbonSource::probe_emf:
      return "probe emf";
    case CarbonSource::co2:
      return "CO2";
    case CarbonSource::dew_point:
      return "dew point";
  }
  return "";
}

std::string_view key(CarbonSource source) {
  switch (source) {
    case CarbonSource::logged:
      return "logged";
    case CarbonSource::probe_emf:
      return "probe_emf";
    case CarbonSource::co2:
      return "co2";
    case CarbonSource::dew_point:
      return "dew_point";
  }
  return "";
}

Role role_of(CarbonSource source) {
  switch (source) {
    case CarbonSource::logged:
      return Role::carbon_potential;
    case CarbonSource::probe_emf:
      return Role::probe_emf;
    case CarbonSource::co2:
      return Role::co2;
    case CarbonSource::dew_point:
      break;
  }
  return Role::dew_point;
}

int Furnace::places() const {
  int sum = 0;
  for (const Chamber& each : chambers) sum += each.places;
  return sum;
}

const Channel* Furnace::channel(std::string_view wanted) const {
  return find(
      channels, [](const Channel& each) -> std::string_view { return each.name; }, wanted);
}
const Chamber* Furnace::chamber(std::string_view wanted) const {
  return find(
      chambers, [](const Chamber& each) -> std::string_view { return each.id; }, wanted);
}
const CsvMapping* Furnace::csv_mapping(std::string_view wanted) const {
  return find(
      csv_mappings, [](const CsvMapping& each) -> std::string_view { return each.name; }, wanted);
}
const Furnace* Plant::furnace(std::string_view wanted) const {
  return find(
      furnaces, [](const Furnace& each) -> std::string_view { return each.id; }, wanted);
}
const SteelEntry* Plant::steel(std::string_view wanted) const {
  return find(
      steels, [](const SteelEntry& each) -> std::string_view { return each.steel.name; }, wanted);
}

}  // namespace hearthfront::server
