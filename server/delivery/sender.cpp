#include "server/delivery/sender.h"

namespace hearthfront::server {

std::unique_ptr<Sender> make_sender(const DeliveryTarget& target) {
  if (const auto* webhook = std::get_if<WebhookTarget>(&target.to))
    return make_webhook_sender(*webhook, target.timeout_s);
  if (const auto* mail = std::get_if<MailTarget>(&target.to))
    return make_mail_sender(*mail, target.timeout_s);
  return make_mqtt_sender(std::get<MqttTarget>(target.to), target.timeout_s);
}

}  // namespace hearthfront::server
