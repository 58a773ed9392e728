// Start here: sends what stands in the outbox. Each target has a thread of its own, so that a slow or dead
// one holds up nobody else. At least once: a message counts as delivered only after the receiver's
// acknowledgement was stored; a crash in between sends it a second time with the same key. Messages about one
// alert reach a target in their order.
#pragma once

#include <cstddef>
#include <functional>
#include <memory>
#include <mutex>
#include <stop_token>
#include <string>
#include <vector>

#include "server/base/clock.h"
#include "server/base/target.h"
#include "server/delivery/sender.h"
#include "storage/store.h"

namespace hearthfront::server {

class TargetWorker;

class Dispatcher {
 public:
  // The references must outlive it. `changed` is called after a message went or failed, from a target's
  // thread.
  Dispatcher(const std::vector<DeliveryTarget>& targets, storage::Store& store, const Clock& clock,
             std::function<void()> changed);
  ~Dispatcher();
  Dispatcher(const Dispatcher&) = delete;
  Dispatcher& operator=(const Dispatcher&) = delete;

  // Gives up messages to targets that the settings no longer name, logs what is wrong with secret files, and
  // begins to send.
  void start();
  // Ends tries under way within half a second; what is unsent stays in the outbox. Tests are refused from
  // then on. Safe to call twice.
  void stop();
  // There may be something new in the outbox. Never waits. Any thread.
  void wake();

  const std::vector<DeliveryTarget>& targets() const { return targets_; }
  const DeliveryTarget* find(const std::string& name) const;
  // Why nothing can be sent to it at all, as of now; empty: nothing known.
  std::string fault(const DeliveryTarget& target) const;
  // Sends a message that says it is a test, now and once, on the calling thread; takes 10 s at most. One test
  // at a time: a second one is answered SendOutcome::again at once.
  SendResult test(const DeliveryTarget& target, const std::string& person);

 private:
  const std::vector<DeliveryTarget>& targets_;
  storage::Store& store_;
  const Clock& clock_;
  std::function<void()> changed_;
  std::stop_source stop_;
  std::mutex test_mutex_;
  std::vector<std::unique_ptr<TargetWorker>> workers_;
};

}  // namespace hearthfront::server
