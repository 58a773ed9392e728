#include "server/delivery/dispatcher.h"

#include <algorithm>

#include "server/base/json_fields.h"
#include "server/base/log.h"
#include "server/base/time_text.h"
#include "server/delivery/target_worker.h"

namespace hearthfront::server {
namespace {

constexpr int longest_test_s = 10;

}  // namespace

Dispatcher::Dispatcher(const std::vector<DeliveryTarget>& targets, storage::Store& store, const Clock& clock,
                       std::function<void()> changed)
    : targets_(targets), store_(store), clock_(clock), changed_(std::move(changed)) {
  for (const DeliveryTarget& target : targets_)
    workers_.push_back(std::make_unique<TargetWorker>(WorkerParts{target, store_, clock_, changed_}));
}

Dispatcher::~Dispatcher() {
  stop();
}

void Dispatcher::start() {
  storage::Reader reader(store_.path());
  for (const storage::TargetState& known : reader.targets()) {
    if (known.waiting + known.stuck == 0 || find(known.target) != nullptr) continue;
    const std::string why = "the settings no longer have a target of this name";
    // Stuck ones too: nobody could have them tried again, and that they are stuck would be said for ever.
    if (known.stuck > 0)
      store_.retry_stuck(known.target,
                         {clock_.now_us(), "Settings", "give up target", "target " + known.target, "", ""});
    for (auto rows = reader.outbox_waiting(known.target, 1000); !rows.empty();
         rows = reader.outbox_waiting(known.target, 1000))
      for (const storage::OutboxRow& row : rows)
        store_.note_delivery(
            {row.id, storage::DeliveryState::dropped, row.attempts, row.next_try_us, {}, why});
    log_warn("messages to a target were given up",
             {{"target", known.target}, {"messages", known.waiting + known.stuck}, {"what", why}});
  }
  for (const DeliveryTarget& target : targets_) {
    if (const std::string wrong = fault(target); !wrong.empty())
      log_error("nothing can be sent to a target", {{"target", target.name}, {"what", wrong}});
  }
  for (const auto& worker : workers_) worker->start(stop_.get_token());
}

void Dispatcher::stop() {
  stop_.request_stop();
  for (const auto& worker : workers_) worker->join();
  // A test on another thread ends as soon.
  const std::lock_guard lock(test_mutex_);
}

void Dispatcher::wake() {
  for (const auto& worker : workers_) worker->wake();
}

const DeliveryTarget* Dispatcher::find(const std::string& name) const {
  const auto found =
      std::find_if(targets_.begin(), targets_.end(), [&](const DeliveryTarget& t) { return t.name == name; });
  return found == targets_.end() ? nullptr : &*found;
}

std::string Dispatcher::fault(const DeliveryTarget& target) const {
  return make_sender(target)->fault();
}

SendResult Dispatcher::test(const DeliveryTarget& target, const std::string& person) {
  const std::unique_lock lock(test_mutex_, std::try_to_lock);
  if (!lock.owns_lock())
    return {SendOutcome::again, "another test is under way; try again in some seconds", 0};
  if (stop_.stop_requested()) return {SendOutcome::stopped, "the daemon is stopping", 0};
  const std::string now = format_time(clock_.now_us());
  const std::string key = "test-" + target.name + "-" + std::to_string(clock_.now_us());
  const Json payload{{"event", "test"},
                     {"key", key},
                     {"alert", nullptr},
                     {"at", now},
                     {"person", person},
                     {"sentence", "This is a test: " + person + " wants to know whether alerts arrive here."},
                     {"advice", "Nothing is to be done."}};
  DeliveryTarget hurried = target;
  hurried.timeout_s = std::min(target.timeout_s, longest_test_s);
  SendResult result = make_sender(hurried)->send({key, "", 1, dumped(payload)}, stop_.get_token());
  if (result.outcome == SendOutcome::stopped) result.error = "the daemon is stopping";
  return result;
}

}  // namespace hearthfront::server
