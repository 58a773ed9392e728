// One way of sending. A Sender belongs to one thread at a time; it reads its secret file anew for each
// message, so that a changed key counts from the next one on. No secret is ever part of an error.
#pragma once

#include <cstdint>
#include <memory>
#include <stop_token>
#include <string>

#include "server/base/target.h"

namespace hearthfront::server {

struct Message {
  std::string key;        // the same at each try; receivers tell repeats by it
  std::string first_key;  // of the first message about the same alert to this target; empty: this one
  std::int64_t attempt = 1;
  std::string payload_json;  // what GET /api/v1/alerts/{id} says, as of the event
};

enum class SendOutcome : std::uint8_t {
  delivered,  // the receiver acknowledged it
  again,      // may work later
  refused,    // will not work before a person changes something
  stopped     // given up because the daemon stops; the receiver may have got it
};

struct SendResult {
  SendOutcome outcome = SendOutcome::again;
  std::string error;     // for people; of a delivered one what was wrong all the same, mostly empty
  int not_before_s = 0;  // the receiver asked for so much patience
};

class Sender {
 public:
  Sender() = default;
  virtual ~Sender() = default;
  Sender(const Sender&) = delete;
  Sender& operator=(const Sender&) = delete;

  // Takes the target's timeout at most, and gives up within half a second of a stop request. Never throws
  // for what the network or the receiver does.
  virtual SendResult send(const Message& message, const std::stop_token& stop) = 0;
  // Why nothing can be sent at all (a secret or certificate file that cannot be read); empty: nothing wrong.
  virtual std::string fault() const = 0;
};

std::unique_ptr<Sender> make_sender(const DeliveryTarget& target);
std::unique_ptr<Sender> make_webhook_sender(const WebhookTarget& target, int timeout_s);
std::unique_ptr<Sender> make_mail_sender(const MailTarget& target, int timeout_s);
std::unique_ptr<Sender> make_mqtt_sender(const MqttTarget& target, int timeout_s);

}  // namespace hearthfront::server
