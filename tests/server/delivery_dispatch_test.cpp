// The dispatcher over a real store, with real HTTP receivers: our own front, and sockets that never answer.
#include <arpa/inet.h>
#include <doctest/doctest.h>
#include <sys/socket.h>
#include <unistd.h>

#include <chrono>
#include <fstream>
#include <mutex>
#include <thread>

#include "server/api/http_server.h"
#include "server/delivery/dispatcher.h"
#include "server/delivery/signature.h"
#include "server/settings_support.h"
#include "server/store_support.h"

using namespace hearthfront::server;
namespace storage = hearthfront::storage;
using hearthfront::test::ScratchFolder;
using storage::DeliveryState;

namespace {

const std::string key_text = "a key of sixteen or more bytes";

// Answers as told and keeps what came.
class Receiver {
 public:
  Receiver() : http_(HttpLimits{}) {
    http_.route("POST", "/hook", [this](const Request& request) {
      const std::lock_guard lock(mutex_);
      got_.push_back(request);
      const int status = statuses_.empty() ? 204 : statuses_.front();
      if (!statuses_.empty()) statuses_.erase(statuses_.begin());
      Response response{status, "text/plain", "as told", {}};
      if (status == 503) response.headers.emplace_back("Retry-After", "120");
      if (status == 302) response.headers.emplace_back("Location", "/hook");
      return response;
    });
    port_ = http_.start("127.0.0.1", 0);
  }
  ~Receiver() { http_.stop(); }
  Receiver(const Receiver&) = delete;
  Receiver& operator=(const Receiver&) = delete;
  void answer(std::vector<int> statuses) {
    const std::lock_guard lock(mutex_);
    statuses_ = std::move(statuses);
  }
  std::vector<Request> got() {
    const std::lock_guard lock(mutex_);
    return got_;
  }
  std::string url() const { return "http://127.0.0.1:" + std::to_string(port_) + "/hook"; }

 private:
  HttpServer http_;
  int port_ = 0;
  std::mutex mutex_;
  std::vector<int> statuses_;
  std::vector<Request> got_;
};

// Takes connections into its backlog and never says a word.
class SilentSocket {
 public:
  SilentSocket() : socket_(socket(AF_INET, SOCK_STREAM | SOCK_CLOEXEC, 0)) {
    sockaddr_in address{};
    address.sin_family = AF_INET;
    address.sin_addr.s_addr = htonl(INADDR_LOOPBACK);
    socklen_t size = sizeof address;
    REQUIRE(bind(socket_, reinterpret_cast<sockaddr*>(&address), size) == 0);
    REQUIRE(listen(socket_, 16) == 0);
    REQUIRE(getsockname(socket_, reinterpret_cast<sockaddr*>(&address), &size) == 0);
    port = ntohs(address.sin_port);
  }
  ~SilentSocket() { close(socket_); }
  SilentSocket(const SilentSocket&) = delete;
  SilentSocket& operator=(const SilentSocket&) = delete;
  int port = 0;

 private:
  int socket_;
};

struct Shop {
  Shop() { folder.write("key", key_text + "\n"); }
  DeliveryTarget webhook(const std::string& name, const std::string& url) const {
    DeliveryTarget target;
    target.name = name;
    target.to = WebhookTarget{url, folder.path("key"), ""};
    return target;
  }
  // One alert with a message to each of the named targets; returns nothing to wait for: it is stored.
  void raise(const std::vector<std::string>& names, const std::string& event = "raised") {
    storage::AlertWrite write;
    storage::AlertRow row;
    row.id = ++alerts;
    row.key = "k" + std::to_string(alerts);
    row.kind = "no reading";
    row.severity = "warning";
    row.sentence = "Nothing comes.";
    row.state = storage::AlertState::active;
    row.raised_us = row.since_us = row.last_seen_us = clock.now_us();
    write.rows.push_back(row);
    for (const std::string& name : names) {
      storage::OutboxRow message;
      message.alert = row.id;
      message.created_us = message.next_try_us = clock.now_us();
      message.target = name;
      message.event = event;
      message.key = row.key + "-" + event + "-" + name;
      message.payload_json = R"({"event":")" + event + R"(","alert":{"sentence":"Nothing comes."}})";
      write.outbox.push_back(message);
    }
    store.save_alerts(write);
  }
  std::vector<storage::OutboxRow> messages(std::int64_t alert) {
    return storage::Reader(store.path()).deliveries(alert);
  }
  template <typename Probe>
  bool within(double seconds, Probe probe) {
    const auto end = std::chrono::steady_clock::now() + std::chrono::duration<double>(seconds);
    while (std::chrono::steady_clock::now() < end) {
      if (probe()) return true;
      std::this_thread::sleep_for(std::chrono::milliseconds(10));
    }
    return false;
  }

  ScratchFolder folder;
  test::StoreFolder store_folder;
  storage::Store store{store_folder.options()};
  SystemClock clock;
  std::int64_t alerts = 0;
};

double seconds_of(const std::function<void()>& call) {
  const auto start = std::chrono::steady_clock::now();
  call();
  return std::chrono::duration<double>(std::chrono::steady_clock::now() - start).count();
}

}  // namespace

TEST_CASE("a message arrives signed, with its key, and is noted as delivered") {
  Shop shop;
  Receiver receiver;
  const std::vector<DeliveryTarget> targets{shop.webhook("hook", receiver.url())};
  std::atomic<int> changes{0};
  Dispatcher dispatcher(targets, shop.store, shop.clock, [&] { ++changes; });
  dispatcher.start();
  shop.raise({"hook"});
  dispatcher.wake();
  REQUIRE(shop.within(10, [&] { return shop.messages(1).at(0).state == DeliveryState::delivered; }));
  const auto got = receiver.got();
  REQUIRE(got.size() == 1);
  CHECK(got[0].body == shop.messages(1).at(0).payload_json);
  CHECK(got[0].headers.at("idempotency-key") == "k1-raised-hook");
  CHECK(got[0].headers.at("content-type") == "application/json");
  CHECK(got[0].headers.count("x-hearthfront-attempt") == 0);
  const std::int64_t timestamp = std::stoll(got[0].headers.at("x-hearthfront-timestamp"));
  CHECK(std::abs(static_cast<double>(timestamp) - static_cast<double>(shop.clock.now_us()) * 1e-6) < 60);
  CHECK(got[0].headers.at("x-hearthfront-signature") == webhook_signature(key_text, timestamp, got[0].body));
  CHECK(shop.within(5, [&] { return changes == 1; }));
}

TEST_CASE("a receiver in trouble is asked again with the same key, and is told which try it is") {
  Shop shop;
  Receiver receiver;
  receiver.answer({500, 503});
  const std::vector<DeliveryTarget> targets{shop.webhook("hook", receiver.url())};
  Dispatcher dispatcher(targets, shop.store, shop.clock, [] {});
  dispatcher.start();
  shop.raise({"hook"});
  dispatcher.wake();
  const auto failed = [&](std::int64_t attempts) {
    return shop.within(10, [&] {
      const auto row = shop.messages(1).at(0);
      return row.attempts == attempts && row.next_try_us > shop.clock.now_us();
    });
  };
  // The wait is put aside, as if it had passed.
  const auto due_now = [&] {
    const auto row = shop.messages(1).at(0);
    shop.store.note_delivery(
        {row.id, DeliveryState::waiting, row.attempts, shop.clock.now_us(), {}, row.last_error});
    dispatcher.wake();
  };
  REQUIRE(failed(1));
  double wait_s = static_cast<double>(shop.messages(1).at(0).next_try_us - shop.clock.now_us()) * 1e-6;
  CHECK(wait_s > 5);
  CHECK(wait_s <= 12.5);
  CHECK(shop.messages(1).at(0).last_error.find("answered 500: as told") != std::string::npos);
  due_now();
  REQUIRE(failed(2));
  wait_s = static_cast<double>(shop.messages(1).at(0).next_try_us - shop.clock.now_us()) * 1e-6;
  CHECK(wait_s > 110);  // Retry-After: 120
  CHECK(wait_s <= 120);
  due_now();
  REQUIRE(shop.within(10, [&] { return shop.messages(1).at(0).state == DeliveryState::delivered; }));
  const auto got = receiver.got();
  REQUIRE(got.size() == 3);
  CHECK(got[1].headers.at("x-hearthfront-attempt") == "2");
  CHECK(got[2].headers.at("x-hearthfront-attempt") == "3");
  CHECK(got[2].headers.at("idempotency-key") == got[0].headers.at("idempotency-key"));
  CHECK(got[2].body == got[0].body);
}

TEST_CASE("a refusal is stuck at once, a redirect too, and the limit of tries holds") {
  Shop shop;
  Receiver receiver;
  receiver.answer({404, 302, 500});
  std::vector<DeliveryTarget> targets{shop.webhook("hook", receiver.url())};
  targets[0].attempts_limit = 1;
  Dispatcher dispatcher(targets, shop.store, shop.clock, [] {});
  for (int i = 0; i < 3; ++i) shop.raise({"hook"});
  dispatcher.start();
  for (const int alert : {1, 2, 3})
    REQUIRE(shop.within(15, [&] { return shop.messages(alert).at(0).state == DeliveryState::stuck; }));
  CHECK(receiver.got().size() == 3);  // no redirect was followed
  CHECK(shop.messages(2).at(0).last_error.find("answered 302") != std::string::npos);
  // A person has them tried again.
  CHECK(shop.store.retry_stuck("hook",
                               {shop.clock.now_us(), "Test", "retry target", "target hook", "", ""}) == 3);
  dispatcher.wake();
  for (const int alert : {1, 2, 3})
    CHECK(shop.within(15, [&] { return shop.messages(alert).at(0).state == DeliveryState::delivered; }));
}

TEST_CASE("a missing key file makes the target stuck and says so; nothing secret is in it") {
  Shop shop;
  Receiver receiver;
  std::vector<DeliveryTarget> targets{shop.webhook("hook", receiver.url())};
  std::get<WebhookTarget>(targets[0].to).secret_file = shop.folder.path("later");
  Dispatcher dispatcher(targets, shop.store, shop.clock, [] {});
  dispatcher.start();
  CHECK(dispatcher.fault(targets[0]).find("later cannot be read: No such file or directory") !=
        std::string::npos);
  shop.raise({"hook"});
  dispatcher.wake();
  REQUIRE(shop.within(10, [&] { return shop.messages(1).at(0).state == DeliveryState::stuck; }));
  CHECK(shop.messages(1).at(0).last_error == dispatcher.fault(targets[0]));
  CHECK(receiver.got().empty());

  shop.folder.write("later", "too short");
  CHECK(dispatcher.fault(targets[0]).find("holds 9 bytes, 16 are the least") != std::string::npos);
  CHECK(dispatcher.fault(targets[0]).find("too short") == std::string::npos);
  shop.folder.write("later", "another key of sixteen bytes");  // read anew, no restart
  CHECK(dispatcher.fault(targets[0]).empty());
  shop.store.retry_stuck("hook", {shop.clock.now_us(), "Test", "retry target", "target hook", "", ""});
  dispatcher.wake();
  REQUIRE(shop.within(10, [&] { return shop.messages(1).at(0).state == DeliveryState::delivered; }));
  const auto got = receiver.got();
  CHECK(got[0].headers.at("x-hearthfront-signature") ==
        webhook_signature("another key of sixteen bytes",
                          std::stoll(got[0].headers.at("x-hearthfront-timestamp")), got[0].body));
}

TEST_CASE("targets that hang hold up nobody, and the dispatcher stops all the same") {
  Shop shop;
  Receiver receiver;
  const SilentSocket silent;
  std::vector<DeliveryTarget> targets{
      shop.webhook("hangs", "http://127.0.0.1:" + std::to_string(silent.port) + "/"),
      shop.webhook("tls-hangs", "https://127.0.0.1:" + std::to_string(silent.port) + "/"),
      shop.webhook("works", receiver.url()), DeliveryTarget{}, DeliveryTarget{}};
  targets[3].name = "mail-hangs";
  targets[3].to = MailTarget{"127.0.0.1", silent.port, "none", "", "", "a@x.example", {"b@x.example"}, ""};
  targets[4].name = "broker-hangs";
  MqttTarget broker;
  broker.host = "127.0.0.1";
  broker.port = silent.port;
  broker.client_id = "test";
  targets[4].to = broker;
  for (DeliveryTarget& target : targets) target.timeout_s = 60;
  Dispatcher dispatcher(targets, shop.store, shop.clock, [] {});
  dispatcher.start();
  shop.raise({"hangs", "tls-hangs", "works", "mail-hangs", "broker-hangs"});
  dispatcher.wake();
  REQUIRE(shop.within(10, [&] { return shop.messages(1).at(2).state == DeliveryState::delivered; }));
  REQUIRE(shop.within(10, [&] { return shop.messages(1).at(4).attempts == 1; }));
  std::this_thread::sleep_for(std::chrono::milliseconds(300));
  CHECK(seconds_of([&] { dispatcher.stop(); }) < 2);
  for (const std::size_t i : {0u, 1u, 3u, 4u}) {
    const auto row = shop.messages(1).at(i);
    CAPTURE(row.target);
    CHECK(row.state == DeliveryState::waiting);  // for the next start
    CHECK(row.attempts == 1);
  }
}

TEST_CASE("a receiver that says nothing is given up after the target's timeout, by whatever way") {
  Shop shop;
  const SilentSocket silent;
  std::vector<DeliveryTarget> targets{
      shop.webhook("hook", "http://127.0.0.1:" + std::to_string(silent.port) + "/"), DeliveryTarget{},
      DeliveryTarget{}};
  targets[1].to = MailTarget{"127.0.0.1", silent.port, "none", "", "", "a@x.example", {"b@x.example"}, ""};
  MqttTarget broker;
  broker.host = "127.0.0.1";
  broker.port = silent.port;
  broker.client_id = "test";
  targets[2].to = broker;
  Dispatcher dispatcher(targets, shop.store, shop.clock, [] {});
  for (DeliveryTarget& target : targets) {
    target.timeout_s = 1;
    CAPTURE(target.kind());
    const double took_s = seconds_of([&] {
      const SendResult result = dispatcher.test(target, "Test");
      CHECK(result.outcome == SendOutcome::again);
      CHECK(result.error.find("127.0.0.1:") != std::string::npos);
    });
    CHECK(took_s > 0.9);
    CHECK(took_s < 3);
  }
}

TEST_CASE("messages to a target that the settings no longer name are given up at the start") {
  Shop shop;
  Receiver receiver;
  shop.raise({"gone", "hook"});
  const std::vector<DeliveryTarget> targets{shop.webhook("hook", receiver.url())};
  Dispatcher dispatcher(targets, shop.store, shop.clock, [] {});
  dispatcher.start();
  CHECK(shop.messages(1).at(0).state == DeliveryState::dropped);
  CHECK(shop.messages(1).at(0).last_error == "the settings no longer have a target of this name");
  CHECK(shop.within(10, [&] { return shop.messages(1).at(1).state == DeliveryState::delivered; }));
}

TEST_CASE("also what got stuck on the way to a target that is gone: it would be told of for ever") {
  Shop shop;
  shop.raise({"gone"});
  const std::int64_t stuck = shop.messages(1).at(0).id;
  shop.store.note_delivery({stuck, DeliveryState::stuck, 9, shop.clock.now_us(), {}, "refused"});
  const std::vector<DeliveryTarget> targets;
  Dispatcher dispatcher(targets, shop.store, shop.clock, [] {});
  dispatcher.start();
  CHECK(shop.messages(1).at(0).state == DeliveryState::dropped);
  CHECK(storage::Reader(shop.store.path()).targets().at(0).stuck == 0);
}
