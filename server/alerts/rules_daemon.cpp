// Rules on the daemon itself: its disk, its clock, and whether its messages arrive.
#include <cmath>

#include "server/alerts/rule_words.h"

namespace hearthfront::server {
namespace {

constexpr double disk_margin = 1.2;  // of the least free space, before it is enough again
constexpr double clear_min = 1;

Situation situation_of(const DaemonState& state, const char* kind, std::string subject) {
  Situation situation;
  situation.condition = {kind, "", 0, std::move(subject)};
  situation.at_us = state.now_us;
  return situation;
}

void judge(Findings& findings, const DaemonState& state, const char* kind,
           std::optional<std::string> subject) {
  findings.judged.push_back({kind, "", 0, std::move(subject), state.now_us, clear_min * 60});
}

void judge_disk(Findings& findings, const DaemonState& state, const AlertSettings& settings) {
  judge(findings, state, "disk", "store");
  if (!state.store_trouble.empty()) {
    Situation situation = situation_of(state, "disk", "store");
    situation.severity = Severity::urgent;
    situation.sentence = "The database takes no writes: " + state.store_trouble;
    situation.advice = "Free space or check the disk. Loggers keep what was not acknowledged.";
    findings.situations.push_back(std::move(situation));
  }
  if (!state.free_mb) return;
  judge(findings, state, "disk", "space");
  if (*state.free_mb >= disk_margin * settings.least_free_mb) return;
  Situation situation = situation_of(state, "disk", "space");
  situation.present = *state.free_mb < settings.least_free_mb;
  situation.sentence = "Only " + fixed(*state.free_mb, 0) + " MB are free on the disk of the database.";
  situation.advice = "Free space before it is full: then no reading can be stored any more.";
  findings.situations.push_back(std::move(situation));
}

void judge_clock(Findings& findings, const DaemonState& state) {
  judge(findings, state, "clock", std::nullopt);
  if (state.clock_jump_s) {
    Situation situation = situation_of(state, "clock", "host");
    situation.sentence = "The clock of this computer jumped " +
                         std::string(*state.clock_jump_s < 0 ? "back" : "forward") + " by " +
                         fixed(std::abs(*state.clock_jump_s), 0) + " s.";
    situation.advice = "Check its time service: readings are judged late or from the future by this clock.";
    findings.situations.push_back(std::move(situation));
  }
  for (const std::string& furnace : state.future_furnaces) {
    Situation situation = situation_of(state, "clock", furnace);
    situation.sentence = "Readings of " + furnace + " came with times in the future and were refused.";
    situation.advice = "Set the clock of the logger, or its time zone in the plant file.";
    findings.situations.push_back(std::move(situation));
  }
}

}  // namespace

Findings judge_daemon(const DaemonState& state, const AlertSettings& settings) {
  Findings findings;
  judge_disk(findings, state, settings);
  judge_clock(findings, state);
  judge(findings, state, "delivery stuck", std::nullopt);
  for (const storage::TargetState& target : state.targets) {
    if (target.stuck == 0) continue;
    Situation situation = situation_of(state, "delivery stuck", target.target);
    situation.sentence = std::to_string(target.stuck) +
                         (target.stuck == 1 ? " message to " : " messages to ") + target.target +
                         " could not be delivered" +
                         (target.last_error.empty() ? "." : ": " + target.last_error);
    situation.advice = "Put the target right, then try its messages again on the alerts page.";
    findings.situations.push_back(std::move(situation));
  }
  return findings;
}

}  // namespace hearthfront::server
