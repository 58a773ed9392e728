// The inputs of the model on the time lattice of a load: for each interval the time-weighted mean of what
// the channels of the chambers it was in say, with its basis, and the recipe's value for the part they are
// silent about.
//
// Carbon potential may come from several sources (logged, probe emf, CO2, dew point). The furnace's order
// says whom to trust; a source that is not measured gives way to one that is.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <vector>

#include "server/live/load_definition.h"
#include "server/live/recipe_place.h"
#include "server/live/series.h"
#include "solver/process/gas_carburizing.h"

namespace hearthfront::server {

struct SourceValue {
  CarbonSource source = CarbonSource::logged;
  double carbon_potential_wt_pct = 0;
  Basis basis = Basis::measured;
  bool leads = false;
  // How far it may be off: by a kelvin of the couple it is computed with, and by the instrument (one sigma).
  double per_k_wt_pct = 0, sd_wt_pct = 0;
};

struct IntervalInput {
  double furnace_temperature_degc = 0;
  std::optional<double> load_temperature_degc;
  double carbon_potential_wt_pct = 0;
  Basis temperature_basis = Basis::measured, carbon_potential_basis = Basis::measured;  // the worst within
  bool gas = true;                                 // false: outside any furnace for most of the interval
  std::optional<double> co_fraction, h2_fraction;  // mole fractions, where measured
  std::optional<solver::FurnaceSettings> furnace;  // the last one it was in
  // Of the leading source, or what a recipe's value stands for where there is none.
  double carbon_potential_per_k = 0, carbon_source_sd_wt_pct = 0;
  std::vector<SourceValue> sources;  // of the chamber it was in last, in the furnace's order
  // Largest difference between sources that are measured; empty with fewer than two.
  std::optional<double> disagreement_wt_pct;
};

// The channels that the model reads, of every chamber on a load's path.
class LoadChannels {
 public:
  explicit LoadChannels(const LoadDefinition& load);

  struct Used {
    std::string furnace, chamber;
    Role role;
    std::string name;
    Unit unit;
  };
  const std::vector<Used>& used() const { return used_; }
  // Takes readings in the channel's own unit.
  std::optional<std::int64_t> replace(std::size_t used, std::int64_t from_us, std::int64_t to_us,
                                      std::vector<Sample> samples);
  std::optional<std::int64_t> set_marks(std::size_t used, std::vector<TimeSpan> marks);

  IntervalInput input(const LoadDefinition& load, const RecipePlace& place, std::int64_t from_us,
                      std::int64_t to_us) const;

  // Of the chamber the load was in at that time.
  const ChannelSeries* series(const LoadDefinition& load, std::int64_t at_us, Role role) const;
  // Touching spans of one basis along the path, for one input; the best source where there are several.
  std::vector<BasisSpan> spans(const LoadDefinition& load, const std::vector<Role>& roles,
                               std::int64_t from_us, std::int64_t to_us) const;
  bool any(Role role) const;
  // Newest reading of the temperature and of a carbon channel, whichever is older; empty where one has
  // none.
  std::optional<std::int64_t> complete_until_us(const LoadDefinition& load, std::int64_t now_us) const;
  std::optional<std::int64_t> newest_us(std::int64_t now_us) const;  // of any channel
  std::int64_t reach_us() const;

 private:
  const ChannelSeries* at(const PathStep& place, Role role) const;

  std::vector<Used> used_;
  std::vector<ChannelSeries> series_;  // as used_, temperatures in degC
};

}  // namespace hearthfront::server
