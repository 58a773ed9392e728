// The rules: from what is published about loads, furnaces and the daemon itself to the conditions that are
// there. Pure functions, tested with hand-made views. Limits come from Settings::Alerts, each with its reason
// there.
//
// A condition belongs to what a person would go to: the load where only it is concerned, else the furnace (a
// gap on a pusher line is one alert, not one for each tray), else the daemon.
#pragma once

#include <cstdint>
#include <map>
#include <memory>
#include <optional>
#include <string>
#include <vector>

#include "server/alerts/situation.h"
#include "server/base/plant.h"
#include "server/base/settings.h"
#include "server/live/channel_health.h"
#include "server/live/view.h"
#include "storage/store.h"

namespace hearthfront::server {

using AlertSettings = Settings::Alerts;

// "projected miss": nothing is judged without an outlook.
Findings judge_outlook(const LoadView& view, const AlertSettings& settings,
                       const solver::StandingLimits& limits = {});
// "segment due", "off recipe": the load against its recipe.
Findings judge_recipe(const LoadView& view, const AlertSettings& settings);
// "carbide limit", "model out of range": what the model says of its own numbers.
Findings judge_model(const LoadView& view, const AlertSettings& settings);

struct NamedHealth {
  std::string channel;
  ChannelHealth health;
};
using LoadViews = std::vector<std::shared_ptr<const LoadView>>;

// "no reading", on the clock; "gap", "sooting gas", "sources disagree", on data time. Views of other furnaces
// are passed over. A furnace without a load is judged to have none of them.
Findings judge_furnace(const Furnace& furnace, const LoadViews& views, const AlertSettings& settings,
                       std::int64_t now_us);
// "stuck reading", "implausible reading", on the clock.
Findings judge_channels(const Furnace& furnace, const std::vector<NamedHealth>& channels,
                        const AlertSettings& settings, std::int64_t now_us);

struct DaemonState {
  std::int64_t now_us = 0;
  std::optional<double> free_mb;             // on the disk of the database; empty: could not be read
  std::string store_trouble;                 // why the last write failed; empty: it did not
  std::optional<double> clock_jump_s;        // of the host's clock against a steady one, lately; signed
  std::vector<std::string> future_furnaces;  // whose readings were refused lately as from the future
  std::vector<storage::TargetState> targets;
};
// "disk", "clock", "delivery stuck", on the clock.
Findings judge_daemon(const DaemonState& state, const AlertSettings& settings);

}  // namespace hearthfront::server
