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
  double measured_s = 0, held_s = 0, masked_s = 0, planned_s = 0;
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

// What published sources say of one quantity; the first is the one used.
struct SourceTable {
  std::string quantity, unit;
  std::vector<solver::SourceValue> values;
};

// After quench and tempering, at the depths of the profile.
struct HardnessResult {
  std::string treatment;  // in words
  std::vector<double> hv, retained_austenite_pct;
  double surface_hv = 0, surface_retained_austenite_pct = 0;
  std::optional<double> surface_hrc;
  std::vector<SourceTable> sources;
};

struct ItemResult {
  // case_depth_mm as hardened; finished_case_depth_mm after the grinding stock is gone.
  std::optional<double> case_depth_mm, finished_case_depth_mm;
  std::optional<double> total_depth_mm, turnover_depth_mm, depth_at_0p35_mm, depth_at_0p40_mm;
  double surface_carbon_wt_pct = 0, carbon_uptake_g_m2 = 0, balance_residual_relative = 0;
  double part_temperature_degc = 0;
  solver::OutcomeKind outcome = solver::OutcomeKind::reached;  // the gravest of the run
  std::vector<double> profile_depth_mm, profile_carbon_wt_pct;
  HardnessResult hardness;
};
const char* outcome_word(solver::OutcomeKind outcome);

struct RunResult {
  std::shared_ptr<const LoadDefinition> definition;
  std::int64_t state_us = 0;
  bool final = false;
  InputSummary temperature, carbon_potential;
  std::optional<InputSummary> load_temperature;  // planned_s: no reading, the lag was used
  std::vector<std::string> temperature_channels, carbon_channels, load_channels;
  bool co_measured = false;
  std::vector<SourceValue> sources;  // of the newest interval
  std::optional<double> disagreement_wt_pct;
  double largest_disagreement_wt_pct = 0;
  std::vector<SegmentRun> segments;  // as the furnace ran them
  std::vector<GapSpan> gaps;
  std::vector<NoteSpan> notes;
  std::vector<ItemResult> items;
  // Bands and chances at state_us; empty while the members have not followed yet.
  std::optional<solver::OutlookMoment> members;
};

RunResult read_result(const LiveLoad& load, std::shared_ptr<const LoadDefinition> definition);

// Whether the sources of the newest interval are further apart than the furnace's tolerance.
bool sources_disagree(const RunResult& result);

// The item whose case is furthest from its window's middle, relative to the window: the one to watch.
std::size_t controlling_item(const RunResult& result);

}  // namespace hearthfront::server
