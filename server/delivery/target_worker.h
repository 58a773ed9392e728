// The thread of one target: takes its messages from the outbox, sends them, notes how it went.
#pragma once

#include <condition_variable>
#include <functional>
#include <mutex>
#include <optional>
#include <stop_token>
#include <thread>
#include <vector>

#include "server/base/clock.h"
#include "server/base/target.h"
#include "server/delivery/sender.h"
#include "storage/store.h"

namespace hearthfront::server {

struct WorkerParts {
  const DeliveryTarget& target;
  storage::Store& store;
  const Clock& clock;
  const std::function<void()>& changed;
};

class TargetWorker {
 public:
  explicit TargetWorker(WorkerParts parts) : parts_(parts) {}
  void start(const std::stop_token& stop);
  void join();
  void wake();

 private:
  void run(const std::stop_token& stop);
  void work(const std::stop_token& stop);
  // Sends what is due; returns after how many real seconds to look again at the latest.
  double round(storage::Reader& reader, Sender& sender, const std::stop_token& stop);
  SendResult send(const storage::OutboxRow& row, storage::Reader& reader, Sender& sender,
                  const std::stop_token& stop);
  storage::DeliveryNote note_of(const storage::OutboxRow& row, const SendResult& result);
  void pause(double seconds, const std::stop_token& stop);

  const WorkerParts parts_;
  std::mutex mutex_;
  std::condition_variable_any wake_;
  bool woken_ = false;
  // Delivered, but the store did not take the note yet: told again to the store, never to the receiver.
  std::optional<storage::DeliveryNote> unnoted_;
  std::thread thread_;
};

// The message to send next, and the real seconds until it is due (0: now); none where nothing waits. Of each
// alert only the oldest waiting message may go. Pure. `rows`: waiting, oldest first; `speed` of the clock.
struct NextMessage {
  std::size_t index = 0;
  double wait_s = 0;
};
std::optional<NextMessage> next_message(const std::vector<storage::OutboxRow>& rows, std::int64_t now_us,
                                        double speed);

}  // namespace hearthfront::server
