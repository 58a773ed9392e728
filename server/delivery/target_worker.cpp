#include "server/delivery/target_worker.h"

#include <algorithm>
#include <chrono>
#include <random>
#include <set>

#include "server/base/log.h"
#include "server/base/utf8.h"
#include "server/delivery/backoff.h"

namespace hearthfront::server {
namespace {

using storage::DeliveryState;

constexpr int rows_at_a_time = 200;
constexpr double look_again_s = 5;  // should a wake-up be missed
constexpr double after_failed_try_s = 1;
constexpr double after_fault_s = 2;  // of the store or of a sender
constexpr std::size_t longest_error_bytes = 500;

double jitter() {
  thread_local std::mt19937 random(std::random_device{}());
  return std::uniform_real_distribution<double>(0, 1)(random);
}

}  // namespace

std::optional<NextMessage> next_message(const std::vector<storage::OutboxRow>& rows, std::int64_t now_us,
                                        double speed) {
  std::set<std::int64_t> earlier;
  std::optional<NextMessage> next;
  for (std::size_t i = 0; i < rows.size(); ++i) {
    if (!earlier.insert(rows[i].alert).second) continue;
    double wait_s = static_cast<double>(rows[i].next_try_us - now_us) * 1e-6 / speed;
    // No wait is as long as this: the host's clock was set back meanwhile.
    if (wait_s > 4 * longest_wait_s) wait_s = 0;
    wait_s = std::max(wait_s, 0.0);
    if (!next || wait_s < next->wait_s) next = NextMessage{i, wait_s};
  }
  return next;
}

void TargetWorker::start(const std::stop_token& stop) {
  thread_ = std::thread([this, stop] { run(stop); });
}

void TargetWorker::join() {
  if (thread_.joinable()) thread_.join();
}

void TargetWorker::wake() {
  {
    const std::lock_guard lock(mutex_);
    woken_ = true;
  }
  wake_.notify_all();
}

void TargetWorker::pause(double seconds, const std::stop_token& stop) {
  std::unique_lock lock(mutex_);
  wake_.wait_for(lock, stop, std::chrono::duration<double>(seconds), [&] { return woken_; });
  woken_ = false;
}

void TargetWorker::run(const std::stop_token& stop) {
  while (!stop.stop_requested()) {
    try {
      work(stop);
    } catch (const std::exception& error) {
      log_warn("sending alerts failed here, trying again",
               {{"target", parts_.target.name}, {"what", error.what()}});
      pause(after_fault_s, stop);
    }
  }
}

void TargetWorker::work(const std::stop_token& stop) {
  storage::Reader reader(parts_.store.path());
  const auto sender = make_sender(parts_.target);
  while (!stop.stop_requested()) {
    if (unnoted_) {
      parts_.store.note_delivery(*unnoted_);
      unnoted_.reset();
    }
    if (const double wait_s = round(reader, *sender, stop); wait_s > 0) pause(wait_s, stop);
  }
}

double TargetWorker::round(storage::Reader& reader, Sender& sender, const std::stop_token& stop) {
  const auto rows = reader.outbox_waiting(parts_.target.name, rows_at_a_time);
  const auto next = next_message(rows, parts_.clock.now_us(), parts_.clock.speed());
  if (!next) return look_again_s;
  if (next->wait_s > 0) return std::min(next->wait_s, look_again_s);
  storage::OutboxRow row = rows[next->index];
  // The try is counted before it begins, so that one after a crash in the middle knows that it is a repeat.
  ++row.attempts;
  parts_.store.note_delivery(
      {row.id, DeliveryState::waiting, row.attempts, row.next_try_us, {}, row.last_error});
  const SendResult result = send(row, reader, sender, stop);
  if (result.outcome == SendOutcome::stopped) return 0;
  unnoted_ = note_of(row, result);
  parts_.store.note_delivery(*unnoted_);
  unnoted_.reset();
  parts_.changed();
  // Many messages to a receiver that is away are not all tried at one moment.
  return result.outcome == SendOutcome::delivered ? 0 : after_failed_try_s;
}

SendResult TargetWorker::send(const storage::OutboxRow& row, storage::Reader& reader, Sender& sender,
                              const std::stop_token& stop) {
  Message message{row.key, "", row.attempts, row.payload_json};
  for (const storage::OutboxRow& other : reader.deliveries(row.alert)) {
    if (other.target != row.target) continue;
    message.first_key = other.key;
    break;
  }
  return sender.send(message, stop);
}

storage::DeliveryNote TargetWorker::note_of(const storage::OutboxRow& row, const SendResult& result) {
  const std::int64_t now = parts_.clock.now_us();
  storage::DeliveryNote note{row.id,       DeliveryState::delivered,
                             row.attempts, row.next_try_us,
                             now,          clean_text(result.error, longest_error_bytes)};
  if (result.outcome == SendOutcome::delivered) {
    if (!note.last_error.empty())
      log_warn("an alert was delivered in part",
               {{"target", row.target}, {"key", row.key}, {"what", note.last_error}});
    return note;
  }
  note.delivered_us.reset();
  const bool given_up =
      result.outcome == SendOutcome::refused || row.attempts >= parts_.target.attempts_limit;
  note.state = given_up ? DeliveryState::stuck : DeliveryState::waiting;
  const double wait_s = std::max<double>(wait_after_s(row.attempts, jitter()), result.not_before_s);
  note.next_try_us = now + static_cast<std::int64_t>(wait_s * parts_.clock.speed() * 1e6);
  log_warn(given_up ? "an alert could not be delivered; given up until somebody has it tried again"
                    : "an alert could not be delivered yet",
           {{"target", row.target}, {"key", row.key}, {"attempts", row.attempts}, {"what", note.last_error}});
  return note;
}

}  // namespace hearthfront::server
