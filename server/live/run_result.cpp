#include "server/live/run_result.h"

#include <algorithm>
#include <array>
#include <cmath>
#include <cstdio>
#include <map>

#include "solver/material/constants.h"

namespace hearthfront::server {
namespace {

constexpr std::array<std::uint32_t, 4> all_notes{
    solver::note_paused_below_austenite, solver::note_capped_at_carbide_limit, solver::note_sooting_gas,
    solver::note_outside_diffusivity_range};

std::optional<double> to_mm(std::optional<double> metres) {
  if (metres) *metres *= 1e3;
  return metres;
}

// Severity, not the numeric order of the list.
int gravity(solver::OutcomeKind kind) {
  switch (kind) {
    case solver::OutcomeKind::reached:
      return 0;
    case solver::OutcomeKind::reached_with_note:
      return 1;
    case solver::OutcomeKind::outside_range:
      return 2;
    case solver::OutcomeKind::failed:
      return 3;
  }
  return 3;
}

InputSummary summarize(const LiveLoad& load, const std::vector<Role>& roles, const std::string& input,
                       std::vector<GapSpan>& gaps) {
  InputSummary summary;
  const LoadDefinition& def = load.definition();
  for (const BasisSpan& span : load.channels().spans(def, roles, def.started_us, load.state_us())) {
    const double length = static_cast<double>(span.to_us - span.from_us) * 1e-6;
    if (span.basis == Basis::measured) {
      summary.measured_s += length;
      continue;
    }
    (span.basis == Basis::held     ? summary.held_s
     : span.basis == Basis::masked ? summary.masked_s
                                   : summary.planned_s) += length;
    gaps.push_back({input, span});
  }
  return summary;
}

std::string treatment_words(const Quench& quench, double martensite_pct) {
  char line[120];
  std::snprintf(line, sizeof line, "after quench to %.0f degC", quench.temperature_degc);
  std::string words = line;
  if (quench.tempering) {
    std::snprintf(line, sizeof line, " and tempering %.0f degC, %.3g h", quench.tempering->temperature_degc,
                  quench.tempering->hours);
    words += line;
  }
  std::snprintf(line, sizeof line, "; %.0f %% martensite", martensite_pct);
  return words + line;
}

template <std::size_t N>
SourceTable table(const char* quantity, const char* unit, const std::array<solver::SourceValue, N>& values) {
  return {quantity, unit, {values.begin(), values.end()}};
}

HardnessResult read_hardness(const solver::Profile& profile, const Item& item, const Quench& quench,
                             double part_degc) {
  const auto& steel = item.steel.composition;
  const bool by_hardness = item.criterion.kind != CriterionKind::carbon;
  const double martensite_pct = by_hardness ? item.criterion.martensite_pct : 99;
  HardnessResult result;
  result.treatment = treatment_words(quench, martensite_pct);
  result.hv = solver::hardness_profile_hv(profile, steel,
                                          {martensite_pct, quench.temperature_degc, quench.tempering});
  for (const double share : solver::retained_austenite_profile(profile, steel, quench.temperature_degc))
    result.retained_austenite_pct.push_back(100 * share);
  result.surface_hv = result.hv.front();
  result.surface_retained_austenite_pct = result.retained_austenite_pct.front();
  result.surface_hrc = solver::hrc_from_hv(result.surface_hv);
  const double surface = profile.carbon_wt_pct.front();
  const double t_k = std::max(part_degc, 850.0) + solver::zero_celsius_k;
  result.sources = {table("Ms at the surface", "degC", solver::martensite_start_by_source(steel, surface)),
                    table("Retained austenite at the surface", "fraction",
                          solver::retained_austenite_by_source(steel, surface, quench.temperature_degc)),
                    table("Alloy factor k", "", solver::alloy_factor_by_source(steel)),
                    table("Diffusivity of plain austenite at the surface carbon", "m2/s",
                          solver::diffusivity_by_source(surface, t_k))};
  return result;
}

ItemResult read_item(const LiveLoad& load, std::size_t i) {
  const auto& state = load.state(i);
  const auto& definition = load.definition().items[i];
  const auto profile = solver::read_profile(state.field, 0, state.conditions[0]);
  ItemResult item;
  item.case_depth_mm = to_mm(solver::depth_at_carbon_m(profile, definition.criterion.carbon_limit_wt_pct));
  if (item.case_depth_mm)
    item.finished_case_depth_mm =
        solver::finished_case_depth_m(*item.case_depth_mm * 1e-3, definition.grinding_stock_mm * 1e-3) * 1e3;
  item.depth_at_0p35_mm = to_mm(solver::depth_at_carbon_m(profile, 0.35));
  item.depth_at_0p40_mm = to_mm(solver::depth_at_carbon_m(profile, 0.40));
  item.total_depth_mm = to_mm(solver::depth_at_carbon_m(
      profile, definition.core_carbon_wt_pct + solver::total_depth_above_core_wt_pct));
  item.turnover_depth_mm = to_mm(solver::turnover_depth_m(state.field, 0, state.conditions[0]));
  item.surface_carbon_wt_pct = profile.carbon_wt_pct[0];
  item.carbon_uptake_g_m2 = solver::carbon_uptake_g_m2(state.field, 0);
  item.balance_residual_relative = solver::balance_residual(state.field, 0, state.initial_wt_pct_m[0]);
  item.part_temperature_degc = state.part_temperature_degc[0];
  item.profile_carbon_wt_pct = profile.carbon_wt_pct;
  for (const double depth : profile.depth_m) item.profile_depth_mm.push_back(depth * 1e3);
  item.hardness = read_hardness(profile, definition, load.definition().quench, item.part_temperature_degc);
  return item;
}

}  // namespace

const char* note_kind(std::uint32_t note) {
  switch (note) {
    case solver::note_paused_below_austenite:
      return "paused below austenite";
    case solver::note_capped_at_carbide_limit:
      return "capped at carbide limit";
    case solver::note_sooting_gas:
      return "sooting gas";
    case solver::note_outside_diffusivity_range:
      return "outside diffusivity range";
    default:
      return "";
  }
}

std::string note_sentence(std::uint32_t note) {
  switch (note) {
    case solver::note_paused_below_austenite:
      return "The part was below its austenite range; carbon transport is not modelled there and was paused.";
    case solver::note_capped_at_carbide_limit:
      return "The gas would have driven the surface beyond the carbide limit; its carbon was capped there.";
    case solver::note_sooting_gas:
      return "The gas was rich enough to deposit soot (graphite activity above 1).";
    case solver::note_outside_diffusivity_range:
      return "The part temperature was outside the range of the diffusivity law; the depth is an "
             "extrapolation.";
    default:
      return "";
  }
}

const char* outcome_word(solver::OutcomeKind outcome) {
  switch (outcome) {
    case solver::OutcomeKind::reached:
      return "reached";
    case solver::OutcomeKind::reached_with_note:
      return "reached with note";
    case solver::OutcomeKind::outside_range:
      return "outside range";
    case solver::OutcomeKind::failed:
      return "failed";
  }
  return "";
}

RunResult read_result(const LiveLoad& load, std::shared_ptr<const LoadDefinition> definition) {
  RunResult result;
  const LoadDefinition& def = *definition;
  result.state_us = load.state_us();
  result.final = load.at_end();
  const auto& channels = load.channels();
  const std::vector<Role> carbon{Role::carbon_potential, Role::probe_emf, Role::co2, Role::dew_point};
  result.temperature = summarize(load, {Role::temperature}, "temperature", result.gaps);
  result.carbon_potential = summarize(load, carbon, "carbon_potential", result.gaps);
  if (channels.any(Role::load_temperature))
    result.load_temperature = summarize(load, {Role::load_temperature}, "load_temperature", result.gaps);
  for (const auto& used : channels.used()) {
    if (used.role == Role::temperature)
      result.temperature_channels.push_back(used.name);
    else if (used.role == Role::load_temperature)
      result.load_channels.push_back(used.name);
    else
      result.carbon_channels.push_back(used.name);
  }
  result.co_measured = channels.any(Role::co);
  result.segments = load.recipe_place().runs();
  for (std::size_t i = 0; i < load.item_count(); ++i) result.items.push_back(read_item(load, i));

  // One open span for each note and item while its bit stays set.
  std::map<std::pair<std::uint32_t, std::size_t>, std::size_t> open;
  load.each_point([&](const RunPoint& point) {
    result.sources = point.input.sources;
    result.disagreement_wt_pct = point.input.disagreement_wt_pct;
    result.largest_disagreement_wt_pct =
        std::max(result.largest_disagreement_wt_pct, point.input.disagreement_wt_pct.value_or(0));
    for (std::size_t i = 0; i < point.items.size(); ++i) {
      if (gravity(point.items[i].outcome) > gravity(result.items[i].outcome))
        result.items[i].outcome = point.items[i].outcome;
      for (const std::uint32_t note : all_notes) {
        const auto key = std::make_pair(note, i);
        if (!(point.items[i].notes & note)) {
          open.erase(key);
        } else if (const auto it = open.find(key); it != open.end()) {
          result.notes[it->second].to_us = point.to_us;
        } else {
          open[key] = result.notes.size();
          result.notes.push_back({note, def.items[i].name, point.from_us, point.to_us});
        }
      }
    }
  });
  // Standing is not read off it, so its limits do not matter.
  if (const LoadEnsemble* members = load.members())
    result.members = solver::read_moment(outlook_items(def, *members->members(), members->now()), {});
  result.definition = std::move(definition);
  return result;
}

bool sources_disagree(const RunResult& result) {
  const Furnace* furnace = result.definition->furnace(result.definition->place_at(result.state_us).furnace);
  return furnace && result.disagreement_wt_pct.value_or(0) > furnace->source_tolerance_wt_pct;
}

std::size_t controlling_item(const RunResult& result) {
  std::size_t worst = 0;
  double worst_distance = -1;
  for (std::size_t i = 0; i < result.items.size(); ++i) {
    const auto [low, high] = result.definition->items[i].case_depth_window_mm;
    const double depth = result.items[i].finished_case_depth_mm.value_or(low);
    const double distance = std::fabs(depth - 0.5 * (low + high)) / (high - low);
    if (distance > worst_distance) {
      worst = i;
      worst_distance = distance;
    }
  }
  return worst;
}

}  // namespace hearthfront::server
