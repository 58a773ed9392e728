#include <array>

#include "server/base/number_text.h"
#include "server/base/plant_parts.h"

namespace hearthfront::server {
namespace {

struct Element {
  std::string_view symbol;
  double solver::Composition::*amount;
  double low, high;  // wt%: where the solver's laws hold, solver/material/steel.h
};

constexpr std::array<Element, 6> elements{{
    {"C", &solver::Composition::c_wt_pct, 0.05, 0.35},
    {"Mn", &solver::Composition::mn_wt_pct, 0, 2},
    {"Cr", &solver::Composition::cr_wt_pct, 0, 2.5},
    {"Ni", &solver::Composition::ni_wt_pct, 0, 4},
    {"Mo", &solver::Composition::mo_wt_pct, 0, 0.6},
    {"Si", &solver::Composition::si_wt_pct, 0, 0.6},
}};

// The standard's range is there to catch a typing error in the value that the model uses.
void read_composition(ConfigTable& table, solver::Composition& composition) {
  table.require("composition_wt_pct", "the model needs the steel's composition");
  std::optional<ConfigTable> values = table.table("composition_wt_pct");
  if (!values) return;
  values->require("C", "it is the carbon of the core");
  std::optional<ConfigTable> ranges = table.table("range_wt_pct");
  for (const Element& element : elements) {
    double& amount = composition.*element.amount;
    const bool given = values->number(element.symbol, amount, element.low, element.high);
    std::vector<double> range;
    if (!ranges || !ranges->numbers(element.symbol, range, 2, 0, 10)) continue;
    if (range[0] > range[1]) {
      ranges->fault(element.symbol, "the lower limit stands first");
    } else if (given && (amount < range[0] || amount > range[1])) {
      values->fault(element.symbol, number_text(amount) + " is outside the range " + number_text(range[0]) +
                                        " to " + number_text(range[1]) + " given in range_wt_pct");
    }
  }
  values->finish();
  if (ranges) ranges->finish();
}

}  // namespace

std::vector<SteelEntry> read_steels(const std::string& path, ConfigErrors& errors) {
  std::vector<SteelEntry> steels;
  const std::optional<ConfigValue> file = parse_toml_file(path, errors);
  if (!file) return steels;
  ConfigTable root(path, *file, "the file", errors);
  std::vector<std::string> ids;
  for (ConfigTable& each : root.tables("steel")) {
    SteelEntry entry;
    each.require("id", "loads name the steel by it");
    each.text("id", entry.steel.name, 1, 40);
    claim(each, "id", entry.steel.name, ids);
    each.text("standard", entry.standard, 0, 100);
    each.text("number", entry.number, 0, 40);
    each.text("note", entry.note, 0, 300);
    read_composition(each, entry.steel.composition);
    each.finish();
    steels.push_back(std::move(entry));
  }
  if (steels.empty()) root.require("steel", "at least one [[steel]] is needed");
  root.finish();
  return steels;
}

}  // namespace hearthfront::server
