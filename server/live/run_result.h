// What is said about a load at one moment, read off its run: the numbers of the result document. Plain
// data, deterministic: no wall-clock time in it.
#pragma once

#include <cstdint>
#include <memory>
#include <optional>
#include <string>
#include <vector>

#include "server/live/live_load.h"

namespace hearthfront::server {

struct InputSummary {
  double measured_s = 0, held_s = 0, planned_s = 0;
};

struct GapSpan {
  std::string input;  // temperature, carbon_potential, load_temperature
  BasisSpan span;
};

struct NoteSpan {
  std::uint32_t note = 0;  // one solver::Note bit
  std::string item;
  std::int64_t from_us = 0, to_us = 0;
};
const char* note_kind(std::uint32_t note);  // "paused below austenite", ...
std::string note_sentence(std::uint32_t note);

struct ItemResult {
  std::optional<double> case_depth_mm, total_depth_mm, turnover_depth_mm, depth_at_0p35_mm, depth_at_0p40_mm;
  double surface_carbon_wt_pct = 0, carbon_uptake_g_m2 = 0, balance_residual_relative = 0;
  double part_temperature_degc = 0;
  solver::OutcomeKind outcome = solver::OutcomeKind::reached;  // the gravest of the run
  std::vector<double> profile_depth_mm, profile_carbon_wt_pct;
};
const char* outcome_word(solver::OutcomeKind outcome);

struct RunResult {
  std::shared_ptr<const LoadDefinition> definition;
  std::int64_t state_us = 0;
  bool final = false;
  InputSummary temperature, carbon_potential;
  std::optional<InputSummary> load_temperature;  // planned_s: no reading, the lag was used
  std::vector<std::string> temperature_channels, carbon_channels, load_channels;
  bool from_probe = false, co_measured = false;
  std::vector<GapSpan> gaps;
  std::vector<NoteSpan> notes;
  std::vector<ItemResult> items;
};

RunResult read_result(const LiveLoad& load, std::shared_ptr<const LoadDefinition> definition);

// The item whose case is furthest from its window's middle, relative to the window: the one to watch.
std::size_t controlling_item(const RunResult& result);

}  // namespace hearthfront::server
