#include "server/live/lattice.h"

#include <algorithm>
#include <cmath>
#include <limits>

#include "server/live/carbon_sources.h"

namespace hearthfront::server {
namespace {

constexpr double rounding_s = 1e-5;

double seconds(std::int64_t us) {
  return static_cast<double>(us) * 1e-6;
}

// What a furnace without a source says about parts that stand in air.
constexpr double outside_degc = 20;

std::optional<MaskRule> mask_rule(Role role) {
  if (role == Role::probe_emf) return probe_in_air;
  if (role == Role::co || role == Role::co2 || role == Role::h2) return analyser_on_zero_gas;
  return std::nullopt;
}

Basis worse(Basis a, Basis b) {
  // By how little is known: measured, masked, held, planned.
  const auto rank = [](Basis basis) {
    return basis == Basis::measured ? 0 : basis == Basis::masked ? 1 : basis == Basis::held ? 2 : 3;
  };
  return rank(a) < rank(b) ? b : a;
}

Basis worst_basis(const Coverage& coverage, double length_s) {
  if (coverage.known_s() < length_s - rounding_s) return Basis::planned;
  if (coverage.held_s > rounding_s) return Basis::held;
  return coverage.masked_s > rounding_s ? Basis::masked : Basis::measured;
}

// The part of one interval that a load spent in one place.
struct Piece {
  const PathStep* place;
  std::int64_t from_us, to_us;
};

std::vector<Piece> pieces(const LoadDefinition& load, std::int64_t from_us, std::int64_t to_us) {
  std::vector<Piece> list;
  for (std::size_t i = 0; i < load.path.size(); ++i) {
    // Before its start a load is looked at where it began.
    const std::int64_t begin = i == 0 ? std::numeric_limits<std::int64_t>::min() : load.path[i].from_us;
    const std::int64_t end =
        i + 1 < load.path.size() ? load.path[i + 1].from_us : std::numeric_limits<std::int64_t>::max();
    const std::int64_t low = std::max(begin, from_us), high = std::min(end, to_us);
    if (low < high) list.push_back({&load.path[i], low, high});
  }
  return list;
}

}  // namespace

LoadChannels::LoadChannels(const LoadDefinition& load) {
  for (const PathStep& step : load.path) {
    if (step.outside()) continue;
    for (const Channel& channel : load.furnace(step.furnace)->channels) {
      const bool taken = std::any_of(used_.begin(), used_.end(), [&](const Used& u) {
        return u.furnace == step.furnace && u.chamber == channel.chamber && u.role == channel.role;
      });
      if (channel.chamber != step.chamber || taken || channel.role == Role::push) continue;
      used_.push_back({step.furnace, channel.chamber, channel.role, channel.name, channel.unit});
      series_.emplace_back(channel.gap_limit_s, channel.hold_limit_s, mask_rule(channel.role));
      std::vector<TimeSpan> marks;
      for (const MaskSpan& mask : load.masks)
        if (mask.furnace == step.furnace && mask.channel == channel.name)
          marks.push_back({mask.from_us, mask.to_us});
      series_.back().set_marks(std::move(marks));
    }
  }
}

std::optional<std::int64_t> LoadChannels::replace(std::size_t used, std::int64_t from_us, std::int64_t to_us,
                                                  std::vector<Sample> samples) {
  if (used_[used].unit == Unit::degf)
    for (Sample& sample : samples) sample.value = convert(sample.value, Unit::degf, Unit::degc);
  return series_[used].replace(from_us, to_us, samples);
}

std::optional<std::int64_t> LoadChannels::set_marks(std::size_t used, std::vector<TimeSpan> marks) {
  return series_[used].set_marks(std::move(marks));
}

const ChannelSeries* LoadChannels::at(const PathStep& place, Role role) const {
  for (std::size_t i = 0; i < used_.size(); ++i)
    if (used_[i].role == role && used_[i].furnace == place.furnace && used_[i].chamber == place.chamber)
      return &series_[i];
  return nullptr;
}

const ChannelSeries* LoadChannels::series(const LoadDefinition& load, std::int64_t at_us, Role role) const {
  return at(load.place_at(at_us), role);
}

bool LoadChannels::any(Role role) const {
  return std::any_of(used_.begin(), used_.end(), [&](const Used& u) { return u.role == role; });
}

IntervalInput LoadChannels::input(const LoadDefinition& load, const RecipePlace& recipe_place,
                                  std::int64_t from_us, std::int64_t to_us) const {
  const double length = seconds(to_us - from_us);
  IntervalInput input;
  double load_couple_s = 0, load_couple_integral = 0, gas_s = 0, carbon_integral = 0;
  double co_s = 0, co_integral = 0, h2_s = 0, h2_integral = 0;
  const Furnace* last_furnace = nullptr;
  input.furnace_temperature_degc = 0;
  for (const Piece& piece : pieces(load, from_us, to_us)) {
    const double piece_s = seconds(piece.to_us - piece.from_us);
    if (piece.place->outside()) {
      input.furnace_temperature_degc += outside_degc * piece_s;
      input.temperature_basis = worse(input.temperature_basis, Basis::planned);
      input.carbon_potential_basis = worse(input.carbon_potential_basis, Basis::planned);
      continue;
    }
    const Furnace& furnace = *load.furnace(piece.place->furnace);
    last_furnace = &furnace;
    const SetPoints planned =
        recipe_place.planned_means(load.recipe_of(recipe_place.now().plan), piece.from_us, piece.to_us);
    const auto cover = [&](Role role) {
      const ChannelSeries* s = at(*piece.place, role);
      return s ? s->cover(piece.from_us, piece.to_us) : Coverage{};
    };
    const auto mean = [](const Coverage& c) {
      return c.known_s() > 0 ? std::optional(c.integral / c.known_s()) : std::nullopt;
    };

    const Coverage temperature = cover(Role::temperature);
    const double furnace_integral =
        temperature.integral + planned.temperature_degc * (piece_s - temperature.known_s());
    input.furnace_temperature_degc += furnace_integral;
    input.temperature_basis = worse(input.temperature_basis, worst_basis(temperature, piece_s));

    const Coverage couple = cover(Role::load_temperature);
    load_couple_s += couple.known_s();
    load_couple_integral += couple.integral;

    CarbonReading reading;
    reading.furnace_degc = furnace_integral / piece_s;
    reading.probe_degc = mean(cover(Role::probe_temperature));
    const Coverage co = cover(Role::co), h2 = cover(Role::h2);
    reading.co_vol_pct = mean(co);
    reading.h2_vol_pct = mean(h2);
    reading.pressure_hpa = mean(cover(Role::pressure));
    std::vector<SourceValue> sources;
    double known_s = 0;
    for (const CarbonSource source : furnace.carbon_sources) {
      const Coverage c = cover(role_of(source));
      reading.value = mean(c);
      const auto potential = carbon_potential_wt_pct(source, furnace, reading);
      if (!potential) continue;
      const SourceDoubt doubt = doubt_of(source, furnace, reading, *potential);
      sources.push_back(
          {source, *potential, worst_basis(c, piece_s), false, doubt.per_k_wt_pct, doubt.sd_wt_pct});
      // The first that is measured leads; while none is, the one that knows most.
      const auto leading =
          std::find_if(sources.begin(), sources.end(), [](const SourceValue& v) { return v.leads; });
      const bool better =
          leading == sources.end() || (leading->basis != Basis::measured &&
                                       worse(leading->basis, sources.back().basis) == leading->basis &&
                                       leading->basis != sources.back().basis);
      if (!better) continue;
      if (leading != sources.end()) leading->leads = false;
      sources.back().leads = true;
      known_s = c.known_s();
    }
    const auto leading =
        std::find_if(sources.begin(), sources.end(), [](const SourceValue& v) { return v.leads; });
    const double potential = leading == sources.end() ? 0 : leading->carbon_potential_wt_pct;
    carbon_integral += potential * known_s + planned.carbon_potential_wt_pct * (piece_s - known_s);
    Basis carbon_basis = leading == sources.end() ? Basis::planned : leading->basis;
    // What is computed with the furnace's temperature is known no better than that.
    if (leading != sources.end() && leading->source != CarbonSource::logged)
      carbon_basis = worse(carbon_basis, worst_basis(temperature, piece_s));
    input.carbon_potential_basis = worse(input.carbon_potential_basis, carbon_basis);
    input.carbon_potential_per_k = leading == sources.end() ? 0 : leading->per_k_wt_pct;
    input.carbon_source_sd_wt_pct =
        leading == sources.end() ? furnace.carbon_potential_sd_wt_pct : leading->sd_wt_pct;
    input.disagreement_wt_pct = spread_of_measured(sources);
    input.sources = std::move(sources);
    gas_s += piece_s;
    co_s += co.known_s();
    co_integral += co.integral;
    h2_s += h2.known_s();
    h2_integral += h2.integral;
  }
  input.furnace_temperature_degc /= length;
  if (load_couple_s > 0.5 * length) input.load_temperature_degc = load_couple_integral / load_couple_s;
  input.gas = gas_s >= 0.5 * length;
  if (gas_s > 0) input.carbon_potential_wt_pct = carbon_integral / gas_s;
  if (co_s > 0.5 * length) input.co_fraction = co_integral / co_s / 100.0;
  if (h2_s > 0.5 * length) input.h2_fraction = h2_integral / h2_s / 100.0;
  if (last_furnace)
    input.furnace = solver::FurnaceSettings{last_furnace->beta_m_per_s, last_furnace->co_fraction,
                                            last_furnace->h2_fraction};
  return input;
}

std::vector<BasisSpan> LoadChannels::spans(const LoadDefinition& load, const std::vector<Role>& roles,
                                           std::int64_t from_us, std::int64_t to_us) const {
  std::vector<BasisSpan> joined;
  const auto add = [&](const BasisSpan& span) {
    if (!joined.empty() && joined.back().basis == span.basis && joined.back().to_us == span.from_us)
      joined.back().to_us = span.to_us;
    else
      joined.push_back(span);
  };
  for (const Piece& piece : pieces(load, from_us, to_us)) {
    std::vector<std::vector<BasisSpan>> each;
    for (const Role role : roles)
      if (const ChannelSeries* s = at(*piece.place, role))
        each.push_back(s->spans(piece.from_us, piece.to_us));
    if (each.empty()) {
      add({Basis::planned, piece.from_us, piece.to_us});
      continue;
    }
    // Walks all lists together; between two cuts the best of them counts.
    std::vector<std::size_t> next(each.size(), 0);
    for (std::int64_t at_us = piece.from_us; at_us < piece.to_us;) {
      Basis best = Basis::planned;
      std::int64_t cut = piece.to_us;
      for (std::size_t i = 0; i < each.size(); ++i) {
        while (each[i][next[i]].to_us <= at_us) ++next[i];
        best = worse(best, each[i][next[i]].basis) == best ? each[i][next[i]].basis : best;
        cut = std::min(cut, each[i][next[i]].to_us);
      }
      add({best, at_us, cut});
      at_us = cut;
    }
  }
  return joined;
}

std::optional<std::int64_t> LoadChannels::complete_until_us(const LoadDefinition& load,
                                                            std::int64_t now_us) const {
  const PathStep& place = load.place_at(now_us);
  const auto newest = [&](Role role) {
    const ChannelSeries* s = at(place, role);
    return s ? s->newest_logged(now_us) : std::nullopt;
  };
  const auto temperature = newest(Role::temperature);
  if (!temperature) return std::nullopt;
  // Any source may lead, so each that has spoken at all must have spoken.
  std::optional<std::int64_t> until;
  for (const Role role : {Role::carbon_potential, Role::probe_emf, Role::co2, Role::dew_point})
    if (const auto sample = newest(role)) until = std::min(until.value_or(sample->time_us), sample->time_us);
  if (!until) return std::nullopt;
  return std::min(*until, temperature->time_us);
}

std::optional<std::int64_t> LoadChannels::newest_us(std::int64_t now_us) const {
  std::optional<std::int64_t> newest;
  for (const ChannelSeries& s : series_)
    if (const auto sample = s.newest_logged(now_us))
      newest = std::max(newest.value_or(sample->time_us), sample->time_us);
  return newest;
}

std::int64_t LoadChannels::reach_us() const {
  std::int64_t reach = 0;
  for (const ChannelSeries& s : series_) reach = std::max(reach, s.reach_us());
  return reach;
}

}  // namespace hearthfront::server
