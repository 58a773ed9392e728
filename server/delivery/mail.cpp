// SMTP by libcurl (RFC 5321, RFC 3207 STARTTLS, RFC 4954 sign-in).
#include <algorithm>
#include <chrono>

#include "server/delivery/alert_mail.h"
#include "server/delivery/curl_transfer.h"
#include "server/delivery/mail_text.h"
#include "server/delivery/secret.h"
#include "server/delivery/sender.h"

namespace hearthfront::server {
namespace {

std::int64_t real_seconds() {
  return std::chrono::duration_cast<std::chrono::seconds>(std::chrono::system_clock::now().time_since_epoch())
      .count();
}

bool is_refusal(const std::string& reply) {
  return reply.size() >= 3 && (reply[0] == '4' || reply[0] == '5') && reply[1] >= '0' && reply[1] <= '5';
}

class MailSender final : public Sender {
 public:
  MailSender(const MailTarget& target, int timeout_s) : target_(target), timeout_s_(timeout_s) {}

  std::string fault() const override {
    return read_login(target_.user, target_.password_file, target_.ca_file).fault;
  }

  SendResult send(const Message& message, const std::stop_token& stop) override {
    const Secret password = read_login(target_.user, target_.password_file, target_.ca_file);
    if (!password.fault.empty()) return {SendOutcome::refused, password.fault, 0};

    const AlertMail alert = alert_mail(message.payload_json);
    Mail mail{
        target_.from, target_.to,    alert.subject, alert.body, message_id_of(message.key, target_.from),
        "",           real_seconds()};
    if (!message.first_key.empty() && message.first_key != message.key)
      mail.in_reply_to = message_id_of(message.first_key, target_.from);

    const bool six = target_.server.find(':') != std::string::npos;
    const std::string host = six ? "[" + target_.server + "]" : target_.server;
    const std::string protocol = target_.tls == "tls" ? "smtps" : "smtp";
    // Behind the slash stands the name we greet with: the sender's domain.
    transfer_.begin(protocol + "://" + host + ":" + std::to_string(target_.port) + "/" +
                        target_.from.substr(target_.from.rfind('@') + 1),
                    protocol, timeout_s_, target_.ca_file);
    transfer_.set(CURLOPT_USE_SSL,
                  static_cast<long>(target_.tls == "none" ? CURLUSESSL_NONE : CURLUSESSL_ALL));
    // A server may have closed a connection that was idle for hours.
    transfer_.set(CURLOPT_FRESH_CONNECT, 1L);
    transfer_.set(CURLOPT_FORBID_REUSE, 1L);
    if (!target_.user.empty()) {
      transfer_.set(CURLOPT_USERNAME, target_.user.c_str());
      transfer_.set(CURLOPT_PASSWORD, password.text.c_str());
    }
    CurlList recipients;
    for (const std::string& address : target_.to) recipients.add("<" + address + ">");
    transfer_.set(CURLOPT_MAIL_FROM, ("<" + target_.from + ">").c_str());
    transfer_.set(CURLOPT_MAIL_RCPT, recipients.get());
    // One address that is wrong must not keep the alert from the others.
    transfer_.set(CURLOPT_MAIL_RCPT_ALLLOWFAILS, 1L);
    transfer_.upload(mail_text(mail));
    return judged(transfer_.run(stop));
  }

 private:
  SendResult judged(const CurlTransfer::Ended& ended) const {
    const auto refusal = std::find_if(ended.lines.begin(), ended.lines.end(), is_refusal);
    const std::string server = target_.server + ":" + std::to_string(target_.port);
    if (ended.code == CURLE_OK && !ended.stopped) {
      if (refusal == ended.lines.end()) return {SendOutcome::delivered, "", 0};
      return {SendOutcome::delivered, server + " took the mail, but not for every address: " + *refusal, 0};
    }
    if (ended.stopped) return {SendOutcome::stopped, "", 0};
    // 4yz is for now, 5yz for good (RFC 5321 4.2.1). A refusal is only believed as the answer that ended it.
    if (refusal != ended.lines.end() && ended.status >= 400) {
      const SendOutcome outcome = ended.status >= 500 ? SendOutcome::refused : SendOutcome::again;
      return {outcome, server + " answered " + *refusal, 0};
    }
    return {SendOutcome::again, "no mail through " + server + ": " + ended.what, 0};
  }

  const MailTarget target_;
  const int timeout_s_;
  CurlTransfer transfer_;
};

}  // namespace

std::unique_ptr<Sender> make_mail_sender(const MailTarget& target, int timeout_s) {
  return std::make_unique<MailSender>(target, timeout_s);
}

}  // namespace hearthfront::server
