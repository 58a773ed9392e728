// Truths that the model does not know, by the plain integrator.
#include <cmath>
#include <deque>
#include <numeric>

#include "support/forecaster.h"
#include "support/plain_integrator.h"
#include "support/random.h"

namespace hearthfront::testing {
namespace {

using Recipe = std::vector<solver::PlannedSegment>;

PlainShape plain_shape(solver::Shape shape) {
  switch (shape) {
    case solver::Shape::cylinder:
      return PlainShape::cylinder;
    case solver::Shape::sphere:
      return PlainShape::sphere;
    case solver::Shape::plate:
      return PlainShape::plate;
    case solver::Shape::bore:
      break;
  }
  throw std::invalid_argument("the plain integrator has no bore");
}

PlainPart plain_part(const SyntheticLoad& load, const solver::Member& truth, PlainLaw law) {
  const solver::Composition& s = load.part.steel;
  PlainPart part;
  part.shape = plain_shape(load.part.section.shape);
  part.extent_m = load.part.section.extent_m;
  part.steel = {s.mn_wt_pct, s.cr_wt_pct, s.ni_wt_pct, s.mo_wt_pct, s.si_wt_pct};
  part.nominal_core_wt_pct = load.part.core_carbon_wt_pct;
  part.core_wt_pct = load.part.core_carbon_wt_pct + truth.core_carbon_offset_wt_pct;
  part.lag_s = load.part.lag_s * truth.lag_scale;
  part.film_s = load.part.film_s * truth.film_scale;
  part.law = law;
  if (law == PlainLaw::agren) part.diffusivity_scale = truth.diffusivity_scale;
  part.diffusion_length_m = load.density.diffusion_length_m;
  return part;
}

// A wander that forgets itself within an hour.
class Wander {
 public:
  Wander(double sd, Random& random) : sd_(sd), value_(sd * random.normal()) {}
  double minute(Random& random) {
    const double kept = std::exp(-1.0 / 60);
    value_ = kept * value_ + sd_ * std::sqrt(1 - kept * kept) * random.normal();
    return value_;
  }

 private:
  double sd_, value_;
};

double length_s(const Recipe& recipe) {
  return std::accumulate(recipe.begin(), recipe.end(), 0.0,
                         [](double sum, const auto& segment) { return sum + segment.duration_s; });
}

// What the furnace and the part really do, and what is logged of it.
class World {
 public:
  World(const WrongWorld& world, const SyntheticLoad& load, std::uint64_t seed)
      : world_(world),
        load_(load),
        random_(seed),
        actual_(load.recipe),
        truth_(solver::draw_truth(load.priors, {{load.hardness_criterion}},
                                  static_cast<std::uint64_t>(random_.uniform() * 1e15))
                   .front()),
        part_(plain_part(load, truth_.member, world.other_diffusivity ? PlainLaw::tibbetts : PlainLaw::agren),
              charge_temperature_degc),
        furnace_(furnace_start_degc, furnace_start_wt_pct),
        expected_(furnace_),
        wander_k_(world.noisy_readings ? 2.0 : 0.0, random_),
        wander_wt_pct_(world.noisy_readings ? 0.015 : 0.0, random_) {
    if (world.drifting_readings) {
      drift_k_h_ = random_.between(1, 2) * (random_.happens(0.5) ? 1 : -1);
      drift_wt_pct_h_ = random_.between(-0.02, 0.02);
    }
    if (world.departing_operator) depart();
    minutes_ = static_cast<int>(std::lround(length_s(actual_) / 60));
  }

  int minutes() const { return minutes_; }
  int minute() const { return minute_; }
  double case_depth_m() const {
    return part_.depth_at_m(load_.criterion_wt_pct + truth_.criterion_offset_wt_pct);
  }

  struct Minute {
    FurnaceTrack::Mean reading;
    double load_degc;
    FurnaceTrack::Mean planned;
  };
  Minute next() {
    const auto done = set_points(actual_, minute_);
    // The plan's set points at the place that the furnace has reached.
    const auto planned = set_points(timed_as_actual(), minute_);
    auto shown = furnace_.minute(done.temperature_degc, done.carbon_potential_wt_pct);
    shown.temperature_degc += load_.offset_k + wander_k_.minute(random_);
    shown.carbon_potential_wt_pct += load_.offset_wt_pct + wander_wt_pct_.minute(random_);
    const double hours = (minute_ + 0.5) / 60;
    const solver::Member& m = truth_.member;
    const double couple_k = m.thermocouple_offset_k + drift_k_h_ * hours;
    const double degc = shown.temperature_degc + couple_k + m.temperature_offset_k;
    const double potential = shown.carbon_potential_wt_pct + load_.carbon_potential_per_k * couple_k +
                             load_.carbon_source_sd_wt_pct * m.carbon_source_error + drift_wt_pct_h_ * hours;
    part_.advance({60, degc, std::max(0.0, potential),
                   m.beta_scale * plain_transfer_m_per_s(load_.part.co_fraction, load_.part.h2_fraction),
                   false, true});
    Minute minute{shown,
                  part_.part_temperature_degc() - m.load_thermocouple_offset_k - m.temperature_offset_k,
                  planned};
    if (world_.noisy_readings) {
      minute.reading.temperature_degc += random_.normal();
      minute.reading.carbon_potential_wt_pct += 0.01 * random_.normal();
      minute.load_degc += random_.normal();
    }
    const auto expected = expected_.minute(planned.temperature_degc, planned.carbon_potential_wt_pct);
    if (!missing(minute_)) {
      beside_.push_back({minute.reading.temperature_degc - expected.temperature_degc,
                         minute.reading.carbon_potential_wt_pct - expected.carbon_potential_wt_pct});
      if (beside_.size() > 30) beside_.pop_front();
    }
    ++minute_;
    return minute;
  }

  bool missing(int minute) const { return world_.gaps && load_.in_gap(minute); }
  Recipe rest() const { return rest_of(load_.recipe, actual_, minute_); }

  // From what was logged alone: the mean of the last half hour beside what the set points promise.
  solver::FurnaceResponse response() const {
    solver::FurnaceResponse response;
    for (const FurnaceTrack::Mean& each : beside_) {
      response.offset_k += each.temperature_degc / static_cast<double>(beside_.size());
      response.offset_carbon_potential_wt_pct +=
          each.carbon_potential_wt_pct / static_cast<double>(beside_.size());
    }
    response.temperature_degc = expected_.degc() + response.offset_k;
    response.carbon_potential_wt_pct = expected_.wt_pct() + response.offset_carbon_potential_wt_pct;
    return response;
  }

 private:
  void depart() {
    // Boost or diffuse.
    const std::size_t segment = 1 + random_.below(2);
    switch (random_.below(3)) {
      case 0:
        actual_[segment].duration_s =
            60 * std::round(actual_[segment].duration_s * random_.between(1.1, 1.2) / 60);
        break;
      case 1:
        actual_[segment].carbon_potential_wt_pct += random_.happens(0.5) ? 0.05 : -0.05;
        break;
      default:
        break;
    }
  }

  Recipe timed_as_actual() const {
    Recipe recipe = load_.recipe;
    for (std::size_t i = 0; i < recipe.size(); ++i) recipe[i].duration_s = actual_[i].duration_s;
    return recipe;
  }

  WrongWorld world_;
  const SyntheticLoad& load_;
  Random random_;
  Recipe actual_;
  solver::TrueMember truth_;
  PlainIntegrator part_;
  FurnaceTrack furnace_, expected_;
  Wander wander_k_, wander_wt_pct_;
  std::deque<FurnaceTrack::Mean> beside_;
  double drift_k_h_ = 0, drift_wt_pct_h_ = 0;
  int minutes_ = 0, minute_ = 0;
};

}  // namespace

Verdicts judge_in(const WrongWorld& world, const SyntheticLoad& load, std::uint64_t seed) {
  Forecaster forecaster(load, seed ^ 0x5bd1e995);
  // The end is needed before the looks: the same world twice, from one seed.
  World ahead(world, load, seed);
  while (ahead.minute() < ahead.minutes()) ahead.next();
  World live(world, load, seed);
  LogToInputs to_inputs(load);
  Verdicts verdicts;
  for (std::size_t look = 0; look < looked_at.size(); ++look) {
    while (live.minute() < look_minute(look, live.minutes())) {
      const bool missing = live.missing(live.minute());
      const World::Minute minute = live.next();
      forecaster.advance(missing ? to_inputs.missing(minute.planned)
                                 : to_inputs.measured(minute.reading, minute.load_degc));
    }
    verdicts[look] = forecaster.look(live.rest(), live.response(), ahead.case_depth_m());
  }
  return verdicts;
}

double plain_depth_m(const SyntheticLoad& load, const solver::TrueMember& truth,
                     const std::vector<solver::IntervalInputs>& inputs) {
  PlainIntegrator part(plain_part(load, truth.member, PlainLaw::agren), charge_temperature_degc);
  const solver::Member& m = truth.member;
  for (const solver::IntervalInputs& in : inputs) {
    const solver::InputDoubt& d = in.doubt;
    const bool by_load = in.load_temperature_degc.has_value();
    const double degc = (by_load ? *in.load_temperature_degc + m.load_thermocouple_offset_k
                                 : in.furnace_temperature_degc + m.thermocouple_offset_k) +
                        m.temperature_offset_k + m.temperature_gap_error * d.temperature_gap_sd_k +
                        m.future_temperature_error * d.future_temperature_sd_k;
    const double potential = in.carbon_potential_wt_pct + m.thermocouple_offset_k * d.carbon_potential_per_k +
                             m.carbon_source_error * d.carbon_source_sd_wt_pct +
                             m.carbon_potential_gap_error * d.carbon_potential_gap_sd_wt_pct +
                             m.future_carbon_potential_error * d.future_carbon_potential_sd_wt_pct;
    part.advance({in.duration_s, degc, std::max(0.0, potential),
                  m.beta_scale * plain_transfer_m_per_s(load.part.co_fraction, load.part.h2_fraction),
                  by_load, true});
  }
  return part.depth_at_m(load.criterion_wt_pct + truth.criterion_offset_wt_pct);
}

}  // namespace hearthfront::testing
