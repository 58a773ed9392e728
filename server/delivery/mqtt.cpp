// MQTT by libmosquitto: connect, publish with QoS 1, wait for the broker's PUBACK, disconnect. Version 5 by
// default, since a 3.1.1 broker has no way of saying that it refused a message (OASIS MQTT 3.1.1, 3.3.5).
//
// The library's own loop waits by select(), which fails for descriptors from 1024 up; so it is driven by poll
// here.
#include <mosquitto.h>
#include <mqtt_protocol.h>
#include <poll.h>
#include <sys/socket.h>

#include <cerrno>
#include <chrono>
#include <optional>
#include <stdexcept>

#include "server/base/json_fields.h"
#include "server/delivery/resolve.h"
#include "server/delivery/secret.h"
#include "server/delivery/sender.h"

namespace hearthfront::server {
namespace {

using Instant = std::chrono::steady_clock::time_point;
constexpr int step_ms = 100;  // how late a stop request may be seen
constexpr int keep_alive_s = 60, packets_at_a_time = 10;

// What the socket failed with since it was last asked, 0: nothing.
int error_of(int descriptor) {
  int error = 0;
  socklen_t size = sizeof error;
  return getsockopt(descriptor, SOL_SOCKET, SO_ERROR, &error, &size) == 0 ? error : errno;
}

// What the callbacks saw, all on the thread that drives the connection.
struct Seen {
  std::optional<int> connected;  // reason code of CONNACK
  std::optional<int> published;  // reason code of PUBACK
  bool gone = false;
  int gone_why = 0;
};

class Connection {
 public:
  Connection(const MqttTarget& target, const std::string& password)
      : five_(target.protocol == "5"), mosquitto_(mosquitto_new(target.client_id.c_str(), true, &seen)) {
    if (mosquitto_ == nullptr) throw std::runtime_error("libmosquitto gives no client");
    mosquitto_int_option(mosquitto_, MOSQ_OPT_PROTOCOL_VERSION,
                         five_ ? MQTT_PROTOCOL_V5 : MQTT_PROTOCOL_V311);
    mosquitto_connect_callback_set(
        mosquitto_, [](mosquitto*, void* self, int code) { static_cast<Seen*>(self)->connected = code; });
    mosquitto_publish_v5_callback_set(mosquitto_,
                                      [](mosquitto*, void* self, int, int code, const mosquitto_property*) {
                                        static_cast<Seen*>(self)->published = code;
                                      });
    mosquitto_disconnect_callback_set(mosquitto_, [](mosquitto*, void* self, int code) {
      static_cast<Seen*>(self)->gone = true;
      static_cast<Seen*>(self)->gone_why = code;
    });
    if (!target.user.empty()) mosquitto_username_pw_set(mosquitto_, target.user.c_str(), password.c_str());
    if (!target.tls) return;
    const bool own = !target.ca_file.empty();
    setup_ = own ? mosquitto_tls_set(mosquitto_, target.ca_file.c_str(), nullptr, nullptr, nullptr, nullptr)
                 : mosquitto_int_option(mosquitto_, MOSQ_OPT_TLS_USE_OS_CERTS, 1);
    if (setup_ == MOSQ_ERR_SUCCESS) setup_ = mosquitto_tls_opts_set(mosquitto_, 1, "tlsv1.2", nullptr);
  }
  ~Connection() { mosquitto_destroy(mosquitto_); }
  Connection(const Connection&) = delete;
  Connection& operator=(const Connection&) = delete;

  int open(const MqttTarget& target) {
    if (setup_ != MOSQ_ERR_SUCCESS) return setup_;
    return mosquitto_connect_async(mosquitto_, target.host.c_str(), target.port, keep_alive_s);
  }
  int publish(const std::string& topic, const std::string& payload) {
    return mosquitto_publish_v5(mosquitto_, nullptr, topic.c_str(), static_cast<int>(payload.size()),
                                payload.data(), 1, false, nullptr);
  }
  void close() {
    if (mosquitto_disconnect(mosquitto_) == MOSQ_ERR_SUCCESS && mosquitto_want_write(mosquitto_))
      mosquitto_loop_write(mosquitto_, 1);
  }
  // Waits for the network for a moment and works off what came.
  int step() {
    const int socket = mosquitto_socket(mosquitto_);
    if (socket < 0) return MOSQ_ERR_NO_CONN;
    pollfd wait{socket, POLLIN, 0};
    if (mosquitto_want_write(mosquitto_)) wait.events |= POLLOUT;
    if (poll(&wait, 1, step_ms) < 0 && errno != EINTR) return MOSQ_ERR_ERRNO;
    if (const int error = error_of(socket); error != 0) {
      errno = error;
      return MOSQ_ERR_ERRNO;
    }
    int code = MOSQ_ERR_SUCCESS;
    if ((wait.revents & POLLOUT) != 0) code = mosquitto_loop_write(mosquitto_, 1);
    if (code == MOSQ_ERR_SUCCESS && (wait.revents & (POLLIN | POLLHUP | POLLERR)) != 0)
      code = mosquitto_loop_read(mosquitto_, packets_at_a_time);
    if (code == MOSQ_ERR_SUCCESS) code = mosquitto_loop_misc(mosquitto_);
    // The library's TLS takes a refused connection for one that is still being made.
    if (code == MOSQ_ERR_SUCCESS && (wait.revents & POLLHUP) != 0) code = MOSQ_ERR_CONN_LOST;
    return code;
  }
  std::string words_of(int connack) const {
    return five_ ? mosquitto_reason_string(connack) : mosquitto_connack_string(connack);
  }

  Seen seen;

 private:
  const bool five_;
  int setup_ = MOSQ_ERR_SUCCESS;
  mosquitto* mosquitto_;
};

std::string words_of_error(int code) {
  return code == MOSQ_ERR_ERRNO ? std::generic_category().message(errno) : mosquitto_strerror(code);
}

// Sign-in and rights do not change by themselves; a broker that is busy or shutting down does.
SendOutcome outcome_of_connack(int code, bool five) {
  if (!five) return code == 3 ? SendOutcome::again : SendOutcome::refused;
  const bool later = code == MQTT_RC_SERVER_UNAVAILABLE || code == MQTT_RC_SERVER_BUSY ||
                     code == MQTT_RC_QUOTA_EXCEEDED || code == MQTT_RC_CONNECTION_RATE_EXCEEDED ||
                     code == MQTT_RC_UNSPECIFIED;
  return later ? SendOutcome::again : SendOutcome::refused;
}

class MqttSender final : public Sender {
 public:
  MqttSender(const MqttTarget& target, int timeout_s) : target_(target), timeout_s_(timeout_s) {
    static const int ready = mosquitto_lib_init();
    if (ready != MOSQ_ERR_SUCCESS) throw std::runtime_error("libmosquitto does not start");
  }

  std::string fault() const override {
    return read_login(target_.user, target_.password_file, target_.ca_file).fault;
  }

  SendResult send(const Message& message, const std::stop_token& stop) override {
    const Secret password = read_login(target_.user, target_.password_file, target_.ca_file);
    if (!password.fault.empty()) return {SendOutcome::refused, password.fault, 0};

    const Instant until = std::chrono::steady_clock::now() + std::chrono::seconds(timeout_s_);
    const std::string fault = unresolvable(target_.host, until, stop);
    if (stop.stop_requested()) return {SendOutcome::stopped, "", 0};
    if (!fault.empty()) return failed("no way to it: " + fault);

    Connection connection(target_, password.text);
    if (const int code = connection.open(target_); code != MOSQ_ERR_SUCCESS)
      return failed("no connection: " + words_of_error(code));
    if (auto ended = drive(connection, connection.seen.connected, until, stop)) return *ended;
    if (const int code = *connection.seen.connected; code != 0)
      return {outcome_of_connack(code, target_.protocol == "5"),
              where() + " refused the connection: " + connection.words_of(code), 0};
    if (const int code = connection.publish(target_.topic, payload_of(message)); code != MOSQ_ERR_SUCCESS)
      return failed(words_of_error(code));
    if (auto ended = drive(connection, connection.seen.published, until, stop)) return *ended;
    const int code = *connection.seen.published;
    connection.close();
    // 0x80 and above is a failure (OASIS MQTT 5.0, 2.4).
    if (code < 0x80) return {SendOutcome::delivered, "", 0};
    const bool later = code == MQTT_RC_QUOTA_EXCEEDED || code == MQTT_RC_UNSPECIFIED;
    return {
        later ? SendOutcome::again : SendOutcome::refused,
        where() + " refused the message for topic " + target_.topic + ": " + mosquitto_reason_string(code),
        0};
  }

 private:
  std::string where() const { return target_.host + ":" + std::to_string(target_.port); }

  SendResult failed(const std::string& why) const {
    return {SendOutcome::again, "not published through " + where() + ": " + why, 0};
  }

  // The payload as it is stored, and which try this is.
  static std::string payload_of(const Message& message) {
    Json payload = Json::parse(message.payload_json, nullptr, false);
    if (!payload.is_object()) payload = {{"text", message.payload_json}};
    payload["key"] = message.key;
    payload["attempt"] = message.attempt;
    return dumped(payload);
  }

  // Until `answer` is there; a result where that came to nothing.
  std::optional<SendResult> drive(Connection& connection, const std::optional<int>& answer, Instant until,
                                  const std::stop_token& stop) const {
    while (!answer) {
      if (stop.stop_requested()) return SendResult{SendOutcome::stopped, "", 0};
      if (std::chrono::steady_clock::now() >= until)
        return failed("no answer within " + std::to_string(timeout_s_) + " s");
      const int code = connection.step();
      if (answer) break;
      if (code != MOSQ_ERR_SUCCESS) return failed(words_of_error(code));
      if (connection.seen.gone) return failed("the broker closed the connection");
    }
    return std::nullopt;
  }

  const MqttTarget target_;
  const int timeout_s_;
};

}  // namespace

std::unique_ptr<Sender> make_mqtt_sender(const MqttTarget& target, int timeout_s) {
  return std::make_unique<MqttSender>(target, timeout_s);
}

}  // namespace hearthfront::server
