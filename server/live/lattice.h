// The inputs of the model on the time lattice of a load: for each interval the time-weighted mean of what
// the channels say, with its basis, and the recipe's value for the part they are silent about.
#pragma once

#include <array>
#include <cstdint>
#include <optional>
#include <string>
#include <vector>

#include "server/live/load_definition.h"
#include "server/live/series.h"

namespace hearthfront::server {

// The recipe as a function of time: set points of the segment at that time; after the last segment its
// values go on.
struct PlannedMeans {
  double temperature_degc = 0, carbon_potential_wt_pct = 0;
};
PlannedMeans planned_means(const LoadDefinition& load, std::int64_t from_us, std::int64_t to_us);

// Which segment a moment belongs to by the recipe's own times.
struct SegmentPlace {
  std::size_t index = 0;
  double elapsed_min = 0, minutes_left = 0;  // minutes_left is negative past the end of the last segment
  bool overdue = false;
};
SegmentPlace segment_at(const LoadDefinition& load, std::int64_t time_us);

struct IntervalInput {
  double furnace_temperature_degc = 0;
  std::optional<double> load_temperature_degc;
  double carbon_potential_wt_pct = 0;
  Basis temperature_basis = Basis::measured, carbon_potential_basis = Basis::measured;  // the worst within
};

// The channels of one chamber that the model reads, by role.
class LoadChannels {
 public:
  explicit LoadChannels(const LoadDefinition& load);

  struct Used {
    Role role;
    std::string name;
    Unit unit;
  };
  const std::vector<Used>& used() const { return used_; }
  // Takes readings in the channel's own unit.
  std::optional<std::int64_t> replace(std::size_t used, std::int64_t from_us, std::int64_t to_us,
                                      std::vector<Sample> samples);

  IntervalInput input(const LoadDefinition& load, std::int64_t from_us, std::int64_t to_us) const;

  const ChannelSeries* series(Role role) const;
  bool from_probe() const { return !series(Role::carbon_potential) && series(Role::probe_emf); }
  // The channel the carbon potential rests on.
  const ChannelSeries* carbon_series() const;
  // Newest reading of the temperature and of the carbon channel, whichever is older; empty where one has
  // none.
  std::optional<std::int64_t> complete_until_us(std::int64_t now_us) const;
  std::optional<std::int64_t> newest_us(std::int64_t now_us) const;  // of any channel
  std::int64_t reach_us() const;

 private:
  std::vector<Used> used_;
  std::vector<ChannelSeries> series_;  // as used_, temperatures in degC
};

}  // namespace hearthfront::server
