#include "server/alerts/daemon_watch.h"

#include <cmath>
#include <filesystem>
#include <system_error>

#include "server/ingest/raw_reading.h"

namespace hearthfront::server {
namespace {

// Time services slew small differences; a step of half a minute is seen on every plot. Common practice, no
// source.
constexpr double jump_limit_s = 30;
constexpr auto said_for = std::chrono::minutes(10);

}  // namespace

bool DaemonWatch::compare_clocks(std::int64_t now_us, Steady steady) {
  bool jumped = false;
  if (last_) {
    const double real_s = std::chrono::duration<double>(steady - last_->second).count();
    const double jump_s = static_cast<double>(now_us - last_->first) * 1e-6 / clock_.speed() - real_s;
    jumped = std::abs(jump_s) > jump_limit_s;
    if (jumped) {
      jump_s_ = jump_s;
      jump_at_ = steady;
    }
  }
  last_ = {now_us, steady};
  if (jump_s_ && steady - jump_at_ > said_for) jump_s_.reset();
  return jumped;
}

DaemonState DaemonWatch::look(storage::Reader& reader, std::int64_t now_us, Steady steady,
                              std::string store_trouble) {
  DaemonState state;
  state.now_us = now_us;
  state.store_trouble = std::move(store_trouble);
  state.clock_jump_s = jump_s_;
  state.targets = reader.targets();
  std::error_code failure;
  const std::filesystem::path folder = std::filesystem::path(database_).parent_path();
  const auto space = std::filesystem::space(folder.empty() ? "." : folder, failure);
  if (!failure) state.free_mb = static_cast<double>(space.available) * 1e-6;

  std::map<std::string, std::int64_t> counts;
  for (const storage::RefusedCount& refused : reader.refused_counts(""))
    if (refused.reason == text(Refusal::future_time)) counts[refused.furnace] += refused.count;
  for (const auto& [furnace, count] : counts) {
    const auto before = future_counts_.find(furnace);
    const bool grew = counted_ && count > (before == future_counts_.end() ? 0 : before->second);
    if (grew) future_at_[furnace] = steady;
    if (const auto at = future_at_.find(furnace); at != future_at_.end() && steady - at->second < said_for)
      state.future_furnaces.push_back(furnace);
  }
  future_counts_ = std::move(counts);
  counted_ = true;  // those refused before the start are no news
  return state;
}

}  // namespace hearthfront::server
