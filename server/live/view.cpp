#include "server/live/view.h"

#include <algorithm>
#include <cmath>
#include <cstdio>

#include "server/live/channel_health.h"

namespace hearthfront::server {
namespace {

double seconds(std::int64_t us) {
  return static_cast<double>(us) * 1e-6;
}

std::optional<double> age_s(const ChannelSeries* series, std::int64_t now_us) {
  const auto newest = series ? series->newest(now_us) : std::nullopt;
  if (!newest) return std::nullopt;
  return seconds(now_us - newest->time_us);
}

std::string silence(const std::string& what, const InputNow& input) {
  const std::string minutes = input.age_s ? std::to_string(std::lround(*input.age_s / 60.0)) + " min" : "";
  const std::string silent = input.age_s ? what + " silent for " + minutes : "No reading of " + what + " yet";
  return silent + (input.basis == Basis::held ? ": last value held." : ": recipe value assumed.");
}

std::string say_what_is_amiss(const LoadView& view) {
  if (view.condition == Condition::ended) return "";
  if (view.condition == Condition::no_data_yet)
    return "No reading yet: everything shown is assumed from the recipe.";
  if (view.condition == Condition::stale)
    return "No reading for " + std::to_string(std::lround(seconds(view.now_us - *view.data_us) / 60.0)) +
           " min: check the logger and its line.";
  for (const ItemResult& item : view.result.items)
    if (item.outcome == solver::OutcomeKind::failed)
      return "The model failed on this load; its numbers stopped at the last good moment.";
  if (view.carbon_potential.basis == Basis::masked)
    return "Carbon potential masked (burn-off, purge or calibration): last value carried.";
  if (view.carbon_potential.basis != Basis::measured && view.temperature.basis != Basis::measured &&
      view.result.definition->place_at(view.result.state_us).outside())
    return "Outside any furnace: the parts are taken to cool in still air.";
  if (view.carbon_potential.basis != Basis::measured)
    return silence("Carbon potential", view.carbon_potential);
  if (view.temperature.basis != Basis::measured) return silence("Temperature", view.temperature);
  if (sources_disagree(view.result)) {
    char line[120];
    std::snprintf(line, sizeof line,
                  "Carbon sources disagree by %.2f %% C: check probe, analyser and dew point.",
                  *view.result.disagreement_wt_pct);
    return line;
  }
  if (!view.segment.doubt.empty()) return view.segment.doubt;
  if (view.segment.long_by_min > 0)
    return "Segment \"" +
           view.result.definition->recipe_of(view.segment.plan).segments[view.segment.index].name +
           "\" has run " + std::to_string(std::lround(view.segment.long_by_min)) +
           " min longer than planned.";
  // A part that is still heating is below its furnace's carbide limit for some minutes: that is no trouble.
  constexpr std::int64_t usual_us = 15 * 60'000'000LL;
  for (const NoteSpan& note : view.result.notes) {
    const bool passing =
        note.note == solver::note_capped_at_carbide_limit && note.to_us - note.from_us < usual_us;
    if (note.to_us == view.result.state_us && note.note != solver::note_paused_below_austenite && !passing)
      return note_sentence(note.note);
  }
  return "";
}

void add_bands(const LiveLoad& load, History& history) {
  static const std::vector<BandPoint> none;
  const std::vector<BandPoint>& bands = load.members() ? load.members()->bands() : none;
  for (std::size_t i = 0; i < history.items.size(); ++i) {
    auto& columns = history.items[i];
    std::size_t next = 0;
    for (const double time_s : history.time_s) {
      while (next < bands.size() && seconds(bands[next].at_us) < time_s) ++next;
      const bool exact = next < bands.size() && seconds(bands[next].at_us) <= time_s;
      const bool between = next > 0 && next < bands.size();
      columns.case_depth_low_mm.emplace_back();
      columns.case_depth_high_mm.emplace_back();
      if (!exact && !between) continue;
      const BandPoint& after = bands[next];
      const BandPoint& before = exact ? after : bands[next - 1];
      const double length_s = seconds(after.at_us - before.at_us);
      const double share = length_s > 0 ? (time_s - seconds(before.at_us)) / length_s : 1;
      const auto mix = [&](double a, double b) { return a + share * (b - a); };
      columns.case_depth_low_mm.back() = mix(before.case_depth_mm[i].low, after.case_depth_mm[i].low);
      columns.case_depth_high_mm.back() = mix(before.case_depth_mm[i].high, after.case_depth_mm[i].high);
    }
  }
}

}  // namespace

const char* text(Condition condition) {
  switch (condition) {
    case Condition::no_load:
      return "no load";
    case Condition::no_data_yet:
      return "no data yet";
    case Condition::stale:
      return "stale";
    case Condition::live:
      return "live";
    case Condition::ended:
      return "ended";
  }
  return "";
}

History read_history(const LiveLoad& load, std::size_t max_points) {
  std::size_t count = 0;
  load.each_point([&](const RunPoint&) { ++count; });
  const std::size_t stride = std::max<std::size_t>(1, (count + max_points - 1) / max_points);
  History history;
  for (const Item& item : load.definition().items) history.items.push_back({item.name, {}, {}, {}, {}, {}});
  std::size_t at = 0;
  load.each_point([&](const RunPoint& point) {
    ++at;
    if (at % stride != 0 && at != count) return;
    history.time_s.push_back(seconds(point.to_us));
    history.temperature_degc.push_back(point.input.furnace_temperature_degc);
    history.carbon_potential_wt_pct.push_back(point.input.carbon_potential_wt_pct);
    history.temperature_basis.push_back(point.input.temperature_basis);
    history.carbon_potential_basis.push_back(point.input.carbon_potential_basis);
    for (std::size_t i = 0; i < point.items.size(); ++i) {
      auto& columns = history.items[i];
      columns.case_depth_mm.push_back(point.items[i].depth_known ? std::optional(point.items[i].case_depth_mm)
                                                                 : std::nullopt);
      columns.surface_carbon_wt_pct.push_back(point.items[i].surface_carbon_wt_pct);
      columns.part_temperature_degc.push_back(point.items[i].part_temperature_degc);
    }
  });
  add_bands(load, history);
  return history;
}

// The first channel of where the load is that shows something odd: stuck, noisy, jumping, drifting apart.
std::string channel_trouble(const LiveLoad& load, std::int64_t now_us) {
  const LoadDefinition& def = load.definition();
  const PathStep& place = def.place_at(load.state_us());
  const Furnace* furnace = place.outside() ? nullptr : def.furnace(place.furnace);
  if (!furnace) return "";
  const auto recent = [&](Role role) {
    std::vector<Sample> samples;
    const ChannelSeries* series = load.channels().series(def, load.state_us(), role);
    if (!series) return samples;
    for (const Sample& sample : series->samples())
      if (sample.time_us > now_us - health_window_us && sample.time_us <= now_us) samples.push_back(sample);
    return samples;
  };
  for (const LoadChannels::Used& used : load.channels().used()) {
    if (used.furnace != place.furnace || used.chamber != place.chamber) continue;
    Channel channel = *furnace->channel(used.name);
    if (channel.unit == Unit::degf) channel.unit = Unit::degc;  // as the series has it
    std::optional<Partner> partner;
    if (used.role == Role::load_temperature)
      partner = Partner{"the furnace thermocouple", recent(Role::temperature)};
    const ChannelHealth health = judge(channel, recent(used.role), {}, partner, now_us);
    if (health.health == Health::stuck || health.health == Health::noisy ||
        health.health == Health::jumping || health.health == Health::drifting)
      return "Channel " + used.name + ": " + health.sentence;
  }
  return "";
}

LoadView make_view(const LiveLoad& load, std::shared_ptr<const LoadDefinition> definition,
                   std::int64_t now_us, double stale_after_s) {
  LoadView view;
  view.now_us = now_us;
  view.result = read_result(load, std::move(definition));
  view.data_us = load.channels().newest_us(load.state_us());
  view.history = std::make_shared<const History>(read_history(load, 600));
  const RecipePlace& place = load.recipe_place();
  const Recipe& recipe = load.definition().recipe_of(place.now().plan);
  view.segment = {place.now().index,
                  place.now().from_us,
                  place.now().by,
                  place.elapsed_min(load.state_us()),
                  place.segment_left_min(recipe, load.state_us()),
                  place.long_by_min(recipe, load.state_us()),
                  place.doubt(recipe),
                  place.now().plan};
  view.minutes_left = place.minutes_left(recipe, load.state_us());

  const RunPoint* last = nullptr;
  load.each_point([&](const RunPoint& point) { last = &point; });
  if (last) {
    view.temperature = {last->input.furnace_temperature_degc, last->input.temperature_basis, std::nullopt};
    view.carbon_potential = {last->input.carbon_potential_wt_pct, last->input.carbon_potential_basis,
                             std::nullopt};
  } else {
    const Segment& first = load.definition().recipe.segments.front();
    view.temperature.value = first.temperature_degc;
    view.carbon_potential.value = first.carbon_potential_wt_pct;
  }
  const auto age_of = [&](Role role) {
    return age_s(load.channels().series(load.definition(), load.state_us(), role), now_us);
  };
  view.temperature.age_s = age_of(Role::temperature);
  for (const SourceValue& each : view.result.sources)
    if (each.leads) view.carbon_potential.age_s = age_of(role_of(each.source));
  if (!view.carbon_potential.age_s)
    for (const CarbonSource source : load.definition().first_furnace().carbon_sources)
      if (const auto age = age_of(role_of(source)); age && !view.carbon_potential.age_s)
        view.carbon_potential.age_s = age;

  if (load.at_end())
    view.condition = Condition::ended;
  else if (!view.data_us)
    view.condition = Condition::no_data_yet;
  else if (seconds(now_us - *view.data_us) > stale_after_s)
    view.condition = Condition::stale;
  else
    view.condition = Condition::live;
  view.message = say_what_is_amiss(view);
  if (view.message.empty() && view.condition == Condition::live) view.message = channel_trouble(load, now_us);
  return view;
}

std::size_t controlling_item(const LoadView& view) {
  return view.outlook ? view.outlook->ahead.end.controlling_item : controlling_item(view.result);
}

void Board::publish(std::shared_ptr<LoadView> view) {
  const std::scoped_lock lock(mutex_);
  view->sequence = ++sequence_;
  loads_[view->row.id] = std::move(view);
}

void Board::remove(std::int64_t load) {
  const std::scoped_lock lock(mutex_);
  loads_.erase(load);
  ++sequence_;
}

std::shared_ptr<const LoadView> Board::load(std::int64_t id) const {
  const std::scoped_lock lock(mutex_);
  const auto it = loads_.find(id);
  return it == loads_.end() ? nullptr : it->second;
}

std::vector<std::shared_ptr<const LoadView>> Board::loads() const {
  const std::scoped_lock lock(mutex_);
  std::vector<std::shared_ptr<const LoadView>> views;
  for (const auto& [id, view] : loads_) views.push_back(view);
  return views;
}

void Board::set_newest_reading(const std::string& furnace, std::int64_t time_us) {
  const std::scoped_lock lock(mutex_);
  auto& newest = newest_.try_emplace(furnace, time_us).first->second;
  newest = std::max(newest, time_us);
}

std::optional<std::int64_t> Board::newest_reading(const std::string& furnace) const {
  const std::scoped_lock lock(mutex_);
  const auto it = newest_.find(furnace);
  return it == newest_.end() ? std::nullopt : std::optional(it->second);
}

}  // namespace hearthfront::server
