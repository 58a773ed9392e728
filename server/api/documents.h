// The JSON documents the dashboard reads: floor, snapshot, history, loads, furnaces, steels. Each function
// is pure: it turns published views and stored rows into text. README.md and openapi.yaml describe them.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <vector>

#include "server/alerts/alert_list.h"
#include "server/base/plant.h"
#include "server/live/channel_health.h"
#include "server/live/view.h"
#include "storage/store.h"

namespace hearthfront::server {

struct FloorFrame {
  std::int64_t now_us = 0;
  double clock_speed = 1;
  std::uint64_t sequence = 0;
};

// Furnaces in order of need: stale data first, then inputs that are not measured, then the rest.
std::string floor_json(const Plant& plant, const Board& board, const AlertList& alerts,
                       const FloorFrame& frame);
std::string snapshot_json(const LoadView& view, const std::vector<storage::LoadNote>& notes,
                          const AlertList& alerts);
std::string history_json(const LoadView& view);
// A load row with its definition body.
std::string load_json(const storage::LoadRow& row, const LoadDefinition& definition);
std::string loads_json(const std::vector<storage::LoadRow>& rows, std::optional<std::int64_t> next_cursor);
std::string steels_json(const Plant& plant);

struct ChannelState {
  const Channel* channel = nullptr;
  storage::ChannelCounts counts;
  ChannelHealth health;
};
struct FurnaceState {
  const Furnace* furnace = nullptr;
  std::vector<ChannelState> channels;
  std::vector<std::int64_t> open_loads;
};
std::string furnace_json(const FurnaceState& state, std::int64_t now_us);
std::string furnaces_json(const std::vector<FurnaceState>& states, std::int64_t now_us);
std::string readings_json(const std::string& channel, Unit unit,
                          const std::vector<storage::Reading>& readings, std::size_t max_points);

}  // namespace hearthfront::server
