#include "server/delivery/webhook.h"

#include <chrono>

#include "server/base/target_text.h"
#include "server/base/version.h"
#include "server/delivery/curl_transfer.h"
#include "server/delivery/secret.h"
#include "server/delivery/signature.h"

namespace hearthfront::server {
namespace {

constexpr std::size_t least_key_bytes = 16;
constexpr int longest_patience_s = 3600;  // a receiver that asks for more is asked again all the same

// The real time, whatever clock the daemon runs on: receivers compare it with theirs.
std::int64_t real_seconds() {
  return std::chrono::duration_cast<std::chrono::seconds>(std::chrono::system_clock::now().time_since_epoch())
      .count();
}

class WebhookSender final : public Sender {
 public:
  WebhookSender(const WebhookTarget& target, int timeout_s) : target_(target), timeout_s_(timeout_s) {}

  std::string fault() const override {
    std::string fault = read_secret(target_.secret_file, least_key_bytes).fault;
    return fault.empty() ? unreadable(target_.ca_file) : fault;
  }

  SendResult send(const Message& message, const std::stop_token& stop) override {
    const Secret key = read_secret(target_.secret_file, least_key_bytes);
    if (!key.fault.empty()) return {SendOutcome::refused, key.fault, 0};
    if (std::string fault = unreadable(target_.ca_file); !fault.empty())
      return {SendOutcome::refused, std::move(fault), 0};

    const std::int64_t now_s = real_seconds();
    CurlList headers;
    headers.add("Content-Type: application/json");
    headers.add("Expect:");  // the body is small: no waiting for a 100
    headers.add("Idempotency-Key: " + message.key);
    headers.add("X-Hearthfront-Timestamp: " + std::to_string(now_s));
    headers.add("X-Hearthfront-Signature: " + webhook_signature(key.text, now_s, message.payload_json));
    if (message.attempt > 1) headers.add("X-Hearthfront-Attempt: " + std::to_string(message.attempt));

    transfer_.begin(target_.url, "http,https", timeout_s_, target_.ca_file);
    transfer_.set(CURLOPT_USERAGENT, (std::string("hearthfront/") + version).c_str());
    transfer_.set(CURLOPT_HTTPHEADER, headers.get());
    transfer_.set(CURLOPT_POSTFIELDSIZE_LARGE, static_cast<curl_off_t>(message.payload_json.size()));
    transfer_.set(CURLOPT_POSTFIELDS, message.payload_json.c_str());
    return judged(transfer_.run(stop));
  }

 private:
  SendResult judged(const CurlTransfer::Ended& ended) const {
    // A status counts although the answer's end did not come: too long an answer, or a line cut off.
    if (ended.status >= 200) {
      const SendOutcome outcome = outcome_of_status(ended.status);
      if (outcome == SendOutcome::delivered) return {outcome, "", 0};
      std::string error = shown_url(target_.url) + " answered " + std::to_string(ended.status);
      if (!ended.answer.empty()) error += ": " + ended.answer;
      if (ended.status >= 300 && ended.status < 400)
        error += "; redirects are not followed, put the final address into the settings";
      return {outcome, std::move(error), std::min(ended.retry_after_s, longest_patience_s)};
    }
    if (ended.stopped) return {SendOutcome::stopped, "", 0};
    return {SendOutcome::again, "no answer from " + shown_url(target_.url) + ": " + ended.what, 0};
  }

  const WebhookTarget target_;
  const int timeout_s_;
  CurlTransfer transfer_;
};

}  // namespace

SendOutcome outcome_of_status(long status) {
  if (status >= 200 && status < 300) return SendOutcome::delivered;
  const bool later = status == 408 || status == 425 || status == 429 || status >= 500;
  return later ? SendOutcome::again : SendOutcome::refused;
}

std::unique_ptr<Sender> make_webhook_sender(const WebhookTarget& target, int timeout_s) {
  return std::make_unique<WebhookSender>(target, timeout_s);
}

}  // namespace hearthfront::server
