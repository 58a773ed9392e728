#include "server/live/load_ensemble.h"

#include <algorithm>
#include <bit>
#include <cmath>

namespace hearthfront::server {
namespace {

// A band of the past is kept for each tenth interval: curves need no more.
constexpr std::int64_t bands_each = 10;

std::uint64_t mixed(std::uint64_t hash, std::uint64_t word) {
  // FNV-1a over the bytes of the word (G. Fowler, L. C. Noll, K.-P. Vo).
  for (int byte = 0; byte < 8; ++byte) hash = (hash ^ (word >> (8 * byte) & 0xff)) * 0x100000001b3ULL;
  return hash;
}

// One sigma of a lab's figure, as carbon at the limit: hardness within 2 % (HV1, common practice, no source),
// a carbon bar within 0.02 wt% (the same).
double lab_sd_wt_pct(const LoadDefinition& load, const Item& item) {
  constexpr double hardness_sd = 0.02, carbon_sd_wt_pct = 0.02, half_step = 0.01;
  if (item.criterion.kind == CriterionKind::carbon) return carbon_sd_wt_pct;
  const solver::HardnessTreatment treatment{item.criterion.martensite_pct, load.quench.temperature_degc,
                                            load.quench.tempering};
  const auto hardness = [&](double carbon) {
    return solver::case_hardness_hv(carbon, item.steel.composition, treatment);
  };
  const double at = item.criterion.carbon_limit_wt_pct;
  const double slope = (hardness(at + half_step) - hardness(at - half_step)) / (2 * half_step);
  return slope > 0 ? hardness_sd * hardness(at) / slope : carbon_sd_wt_pct;
}

}  // namespace

std::uint64_t member_seed(const LoadDefinition& load) {
  std::uint64_t hash = 0xcbf29ce484222325ULL;
  hash = mixed(hash, static_cast<std::uint64_t>(load.started_us));
  for (const char letter : load.path.front().furnace)
    hash = mixed(hash, static_cast<std::uint64_t>(static_cast<unsigned char>(letter)));
  return mixed(hash, load.items.size());
}

solver::Priors priors_of(const LoadDefinition& load) {
  solver::Priors priors;
  const Furnace& furnace = load.first_furnace();
  priors.thermocouple_half_width_k = furnace.thermocouple_tolerance_k;
  priors.uniformity_half_width_k = furnace.uniformity_k;
  return priors;
}

std::shared_ptr<const MemberModels> make_members(const LoadDefinition& load, std::size_t members,
                                                 std::uint64_t seed) {
  std::vector<solver::ItemPriors> items;
  for (const Item& item : load.items) items.push_back({item.criterion.kind != CriterionKind::carbon});
  auto draws = solver::draw_members(priors_of(load), items, seed, members);
  auto made = std::make_shared<MemberModels>();
  for (std::size_t i = 0; i < load.items.size(); ++i) {
    const PartModel model = part_model(load, load.items[i]);
    made->models.emplace_back(model.part, model.density, std::move(draws[i].lanes));
    made->criterion_offset_wt_pct.push_back(std::move(draws[i].criterion_offset_wt_pct));
    made->lab_carbon_sd_wt_pct.push_back(lab_sd_wt_pct(load, load.items[i]));
  }
  return made;
}

MemberStates start_members(const LoadDefinition& load, const MemberModels& members) {
  MemberStates states;
  for (std::size_t i = 0; i < load.items.size(); ++i)
    states.push_back(start_state(load, load.items[i], members.models[i]));
  return states;
}

std::vector<solver::OutlookItem> outlook_items(const LoadDefinition& load, const MemberModels& members,
                                               const MemberStates& states) {
  std::vector<solver::OutlookItem> items;
  for (std::size_t i = 0; i < load.items.size(); ++i) {
    const Item& from = load.items[i];
    solver::OutlookItem item;
    item.model = &members.models[i];
    item.state = &states[i];
    item.criterion_offset_wt_pct = &members.criterion_offset_wt_pct[i];
    item.criterion_wt_pct = from.criterion.carbon_limit_wt_pct;
    item.grinding_stock_m = from.grinding_stock_mm * 1e-3;
    item.case_depth_window_m = {from.case_depth_window_mm.first * 1e-3,
                                from.case_depth_window_mm.second * 1e-3};
    item.surface_carbon_window_wt_pct = from.surface_carbon_window_wt_pct;
    item.lab_carbon_sd_wt_pct = members.lab_carbon_sd_wt_pct[i];
    items.push_back(item);
  }
  return items;
}

solver::IntervalInputs GapClock::take(const RunPoint& point) {
  const double length_s = static_cast<double>(point.to_us - point.from_us) * 1e-6;
  const auto run = [&](double& gap_s, bool measured) {
    const double middle_s = gap_s + 0.5 * length_s;
    gap_s = measured ? 0 : gap_s + length_s;
    return measured ? 0 : middle_s;
  };
  const bool temperature_known =
      point.input.temperature_basis == Basis::measured || point.input.load_temperature_degc.has_value();
  solver::IntervalInputs inputs = solver_inputs(point.input, length_s);
  inputs.doubt.temperature_gap_sd_k = solver::temperature_gap_sd_k(run(temperature_s, temperature_known));
  inputs.doubt.carbon_potential_gap_sd_wt_pct = solver::carbon_potential_gap_sd_wt_pct(
      run(carbon_potential_s, point.input.carbon_potential_basis == Basis::measured));
  return inputs;
}

LoadEnsemble::LoadEnsemble(std::shared_ptr<const LoadDefinition> definition)
    : definition_(std::move(definition)),
      members_(make_members(*definition_, solver::ensemble_members, member_seed(*definition_))),
      settled_{0, start_members(*definition_, *members_), {}},
      now_(settled_),
      marks_{settled_} {
  for (const auto& model : members_->models) workspaces_.emplace_back(model);
}

void LoadEnsemble::rewind_to(std::int64_t interval) {
  if (interval >= settled_.interval) return;
  while (marks_.size() > 1 && marks_.back().interval > interval) marks_.pop_back();
  settled_ = marks_.back();
  std::erase_if(bands_, [&](const BandPoint& band) { return band.interval > settled_.interval; });
}

void LoadEnsemble::advance(Mark& mark, const RunPoint& point) {
  const solver::IntervalInputs inputs = mark.gaps.take(point);
  for (std::size_t i = 0; i < mark.items.size(); ++i)
    members_->models[i].advance(mark.items[i], inputs, workspaces_[i]);
  ++mark.interval;
  ++done_;
}

// Members take a hundred times the memory of the nominal parts, so their marks are further apart.
void LoadEnsemble::set_mark() {
  constexpr std::int64_t densest = 64;
  if (settled_.interval % densest != 0) return;
  marks_.push_back(settled_);
  std::erase_if(marks_, [&](const Mark& mark) {
    const auto age = static_cast<std::uint64_t>((settled_.interval - mark.interval) / densest);
    const auto spacing = densest << std::bit_width(age);
    return mark.interval != settled_.interval && mark.interval % spacing != 0;
  });
}

void LoadEnsemble::note_bands(std::int64_t at_us) {
  const auto items = outlook_items(*definition_, *members_, settled_.items);
  BandPoint band{settled_.interval, at_us, {}};
  for (const solver::Band& depth : solver::case_depth_bands_m(items))
    band.case_depth_mm.push_back({depth.low * 1e3, depth.median * 1e3, depth.high * 1e3});
  bands_.push_back(std::move(band));
}

bool LoadEnsemble::follow(const std::vector<RunPoint>& settled, const std::vector<RunPoint>& provisional,
                          std::size_t most_intervals) {
  for (std::size_t n = 0; static_cast<std::size_t>(settled_.interval) < settled.size(); ++n) {
    if (n == most_intervals) return false;
    const RunPoint& point = settled[static_cast<std::size_t>(settled_.interval)];
    advance(settled_, point);
    if (settled_.interval % bands_each == 0) note_bands(point.to_us);
    set_mark();
  }
  now_ = settled_;
  for (const RunPoint& point : provisional) advance(now_, point);
  return true;
}

}  // namespace hearthfront::server
