#include "server/live/live_load.h"

#include <algorithm>
#include <bit>
#include <cmath>

#include "server/live/solver_inputs.h"

namespace hearthfront::server {

LiveLoad::LiveLoad(std::shared_ptr<const LoadDefinition> definition)
    : definition_(std::move(definition)),
      channels_(*definition_),
      lattice_us_(std::llround(definition_->lattice_s * 1e6)),
      settled_{0, {}, RecipePlace(definition_->started_us), 0},
      now_(settled_),
      state_us_(definition_->started_us) {
  for (const Item& item : definition_->items) {
    const PartModel model = part_model(*definition_, item);
    models_.emplace_back(model.part, model.density);
    settled_.items.push_back(start_state(*definition_, item, models_.back()));
  }
  for (const auto& model : models_) workspaces_.emplace_back(model);
  marks_.push_back(settled_);
  now_ = settled_;
}

std::int64_t LiveLoad::lattice_us(std::int64_t interval) const {
  return definition_->started_us + interval * lattice_us_;
}

void LiveLoad::replace_readings(std::size_t used, std::int64_t from_us, std::int64_t to_us,
                                std::vector<Sample> samples) {
  const auto changed = channels_.replace(used, from_us, to_us, std::move(samples));
  if (changed) rewind_before(*changed);
}

void LiveLoad::set_marks(std::size_t used, std::vector<TimeSpan> marks) {
  if (const auto changed = channels_.set_marks(used, std::move(marks))) rewind_before(*changed);
}

void LiveLoad::rewind_before(std::int64_t time_us) {
  if (time_us >= lattice_us(settled_.interval)) return;
  while (marks_.size() > 1 && lattice_us(marks_.back().interval) > time_us) marks_.pop_back();
  settled_ = marks_.back();
  settled_points_.resize(static_cast<std::size_t>(settled_.interval));
  if (members_) members_->rewind_to(settled_.interval);
}

bool LiveLoad::bring_members_up(std::size_t most_intervals) {
  if (!members_) members_ = std::make_unique<LoadEnsemble>(definition_);
  if (!members_level_)
    members_level_ = members_->follow(settled_points_, provisional_points_, most_intervals);
  return members_level_;
}

// Near the present every 8th interval keeps its mark, further back only each 16th, 32nd and so on.
void LiveLoad::set_mark() {
  constexpr std::int64_t densest = 8;
  if (settled_.interval % densest != 0) return;
  marks_.push_back(settled_);
  std::erase_if(marks_, [&](const RunState& mark) {
    const auto age = static_cast<std::uint64_t>((settled_.interval - mark.interval) / (4 * densest));
    const auto spacing = densest << std::bit_width(age);
    return mark.interval % spacing != 0;
  });
}

RunPoint LiveLoad::advance(RunState& state, std::int64_t to_us) {
  RunPoint point;
  point.from_us = lattice_us(state.interval);
  point.to_us = to_us;
  for (; state.plan < definition_->plans.size() && definition_->plans[state.plan].from_us <= point.from_us;
       ++state.plan)
    state.place.follow(state.plan + 1, definition_->plans[state.plan].from_us);
  point.input = channels_.input(*definition_, state.place, point.from_us, to_us);
  const auto inputs = solver_inputs(point.input, static_cast<double>(to_us - point.from_us) * 1e-6);
  for (std::size_t i = 0; i < models_.size(); ++i) {
    auto& item = state.items[i];
    const solver::Outcome outcome = models_[i].advance(item, inputs, workspaces_[i]);
    const solver::Profile profile = solver::read_profile(item.field, 0, item.conditions[0]);
    const auto depth =
        solver::depth_at_carbon_m(profile, definition_->items[i].criterion.carbon_limit_wt_pct);
    point.items.push_back({depth.value_or(0) * 1e3, profile.carbon_wt_pct[0], item.part_temperature_degc[0],
                           depth.has_value(), outcome.notes, outcome.kind});
  }
  ++state.interval;
  place(state, point);
  return point;
}

void LiveLoad::place(RunState& state, const RunPoint& point) const {
  FurnaceSight sight{point.from_us, point.to_us, std::nullopt, std::nullopt};
  if (point.input.gas && point.input.temperature_basis == Basis::measured)
    sight.temperature_degc = point.input.furnace_temperature_degc;
  if (point.input.gas && point.input.carbon_potential_basis == Basis::measured)
    sight.carbon_potential_wt_pct = point.input.carbon_potential_wt_pct;
  bool due = false;
  const Segment& segment = definition_->recipe_of(state.plan).segments[state.place.now().index];
  if (segment.until) {
    due = segment.until->kind == Until::Kind::part_temperature;
    for (std::size_t i = 0; i < point.items.size(); ++i) {
      const ItemPoint& item = point.items[i];
      if (segment.until->kind == Until::Kind::part_temperature)
        due = due && item.part_temperature_degc >= segment.temperature_degc - segment.until->limit;
      else if (definition_->items[i].name == segment.until->item)
        due = segment.until->kind == Until::Kind::case_depth
                  ? item.depth_known && item.case_depth_mm >= segment.until->limit
                  : item.surface_carbon_wt_pct >= segment.until->limit;
    }
  }
  state.place.step(definition_->recipe_of(state.plan), sight, due);
}

void LiveLoad::advance_to(std::int64_t now_us) {
  members_level_ = false;
  const std::int64_t target = std::max(
      definition_->started_us, definition_->ended_us ? std::min(now_us, *definition_->ended_us) : now_us);
  // In-time readings may still change what lies after the newest complete reading, so it is not settled
  // yet; but a gap settles once it is longer than any reading can speak for.
  std::int64_t settle_until = target;
  if (!definition_->ended_us || target < *definition_->ended_us) {
    const auto complete = channels_.complete_until_us(*definition_, target);
    settle_until = std::min(target, std::max(complete.value_or(0), target - channels_.reach_us()));
  }
  // A clock that was set back: what lies ahead of it is derived again when its time comes.
  if (lattice_us(settled_.interval) > target) rewind_before(target);
  while (lattice_us(settled_.interval + 1) <= settle_until) {
    settled_points_.push_back(advance(settled_, lattice_us(settled_.interval + 1)));
    set_mark();
  }
  now_ = settled_;
  provisional_points_.clear();
  while (lattice_us(now_.interval) < target)
    provisional_points_.push_back(advance(now_, std::min(target, lattice_us(now_.interval + 1))));
  state_us_ = target;
}

std::uint64_t LiveLoad::steps() const {
  std::uint64_t sum = 0;
  for (const auto& workspace : workspaces_) sum += workspace.work().steps;
  return sum;
}

}  // namespace hearthfront::server
