#include "server/api/documents_outlook.h"

#include <cmath>
#include <cstdio>

#include "server/base/time_text.h"
#include "server/live/result_fields.h"

namespace hearthfront::server {
namespace {

double minutes(std::int64_t span_us) {
  return static_cast<double>(span_us) / 60e6;
}

Json item_outlook_json(const Item& item, const solver::ItemOutlook& outlook) {
  return {{"name", item.name},
          {"standing", text(outlook.standing)},
          {"case_depth_mm", band_json(outlook.case_depth_m, 1e3)},
          {"surface_carbon_wt_pct", band_json(outlook.surface_carbon_wt_pct)},
          {"chance", window_chance_json(outlook.case_depth, "shallow", "deep")},
          {"lab_chance", window_chance_json(outlook.lab_case_depth, "shallow", "deep")},
          {"surface_chance", item.surface_carbon_window_wt_pct
                                 ? window_chance_json(outlook.surface_carbon, "below", "above")
                                 : Json(nullptr)},
          {"joint_chance", outlook.joint_chance}};
}

std::string trial_sentence(const LoadOutlook& present, const LoadOutlook& outlook) {
  const double more = minutes(outlook.ends_us - present.ends_us);
  char line[160];
  if (std::fabs(more) < 0.5)
    std::snprintf(line, sizeof line, "Ends as planned; chance %.0f %% -> %.0f %%.",
                  100 * present.ahead.end.joint_chance, 100 * outlook.ahead.end.joint_chance);
  else
    std::snprintf(line, sizeof line, "Ends %.0f min %s; chance %.0f %% -> %.0f %%.", std::fabs(more),
                  more > 0 ? "later" : "earlier", 100 * present.ahead.end.joint_chance,
                  100 * outlook.ahead.end.joint_chance);
  return line;
}

}  // namespace

Json outlook_json(const LoadDefinition& load, const LoadOutlook& outlook) {
  const solver::OutlookMoment& end = outlook.ahead.end;
  Json items = Json::array();
  for (std::size_t i = 0; i < load.items.size(); ++i)
    items.push_back(item_outlook_json(load.items[i], end.items[i]));
  return {{"at", format_time(outlook.at_us)},
          {"ends_at", format_time(outlook.ends_us)},
          {"minutes_left", minutes(outlook.ends_us - outlook.at_us)},
          {"joint_chance", end.joint_chance},
          {"offered_joint_chance", outlook.offered_joint_chance},
          {"best",
           {{"at", format_time(outlook.best_us)},
            {"minutes_from_now", minutes(outlook.best_us - outlook.at_us)},
            {"joint_chance", outlook.ahead.best_joint_chance}}},
          {"controlling_item", load.items[end.controlling_item].name},
          {"offset",
           {{"temperature_k", outlook.offset_k},
            {"carbon_potential_wt_pct", outlook.offset_carbon_potential_wt_pct}}},
          {"items", std::move(items)}};
}

Json outlook_or_null(const LoadView& view) {
  return view.outlook ? outlook_json(*view.result.definition, *view.outlook) : Json(nullptr);
}

Json floor_outlook_json(const LoadView& view, std::size_t item) {
  if (!view.outlook) return nullptr;
  const solver::ItemOutlook& outlook = view.outlook->ahead.end.items[item];
  return {{"standing", text(outlook.standing)},
          {"case_depth_mm", band_json(outlook.case_depth_m, 1e3)},
          {"joint_chance", view.outlook->ahead.end.joint_chance},
          {"ends_at", format_time(view.outlook->ends_us)}};
}

Json rest_json(const std::vector<Segment>& rest) {
  Json list = Json::array();
  for (const Segment& segment : rest)
    list.push_back({{"name", segment.name},
                    {"duration_min", segment.duration_min},
                    {"temperature_degc", segment.temperature_degc},
                    {"carbon_potential_wt_pct", segment.carbon_potential_wt_pct},
                    {"ramp_min", segment.ramp_min}});
  return list;
}

Json adopted_plans_json(const LoadDefinition& load) {
  Json plans = Json::array();
  for (const AdoptedPlan& plan : load.plans)
    plans.push_back({{"at", format_time(plan.from_us)},
                     {"person", plan.person},
                     {"reason", plan.reason},
                     {"segments", rest_json(plan.recipe.segments)}});
  return plans;
}

Json outlook_course_json(const LoadView& view) {
  if (!view.outlook) return nullptr;
  const LoadDefinition& load = *view.result.definition;
  Json times = Json::array(), items = Json::array();
  for (const Item& item : load.items)
    items.push_back({{"name", item.name},
                     {"case_depth_low_mm", Json::array()},
                     {"case_depth_median_mm", Json::array()},
                     {"case_depth_high_mm", Json::array()}});
  const double start_s = static_cast<double>(view.outlook->at_us) * 1e-6;
  for (const solver::OutlookMoment& moment : view.outlook->ahead.course) {
    if (moment.at_s > view.outlook->ahead.end.at_s) break;
    times.push_back(start_s + moment.at_s);
    for (std::size_t i = 0; i < load.items.size(); ++i) {
      const solver::Band& band = moment.items[i].case_depth_m;
      items[i]["case_depth_low_mm"].push_back(band.low * 1e3);
      items[i]["case_depth_median_mm"].push_back(band.median * 1e3);
      items[i]["case_depth_high_mm"].push_back(band.high * 1e3);
    }
  }
  return {{"time_s", std::move(times)}, {"items", std::move(items)}};
}

std::string trial_json(const LoadDefinition& load, const LoadOutlook& present, const LoadOutlook& outlook) {
  return Json{{"at", format_time(outlook.at_us)},
              {"outlook", outlook_json(load, outlook)},
              {"present", outlook_json(load, present)},
              {"minutes_more", minutes(outlook.ends_us - present.ends_us)},
              {"sentence", trial_sentence(present, outlook)}}
      .dump();
}

std::string proposal_json(const LoadView& view, const Proposal& proposal, double asked_chance) {
  const LoadDefinition& load = *view.result.definition;
  return Json{{"found", proposal.found},
              {"asked_chance", asked_chance},
              {"reason", proposal.reason.empty() ? Json(nullptr) : Json(proposal.reason)},
              {"sentence", proposal.sentence},
              {"changes", proposal.changes},
              {"segments", rest_json(proposal.rest)},
              {"outlook", outlook_json(load, *proposal.outlook)},
              {"present", outlook_json(load, *proposal.present)},
              {"minutes_more", proposal.minutes_more},
              {"confirmed",
               {{"members", solver::confirming_members}, {"joint_chance", proposal.confirmed_joint_chance}}},
              {"revision", view.row.revision}}
      .dump();
}

}  // namespace hearthfront::server
