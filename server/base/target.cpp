#include "server/base/target.h"

#include <algorithm>
#include <cstdint>

#include "server/base/nearest.h"
#include "server/base/settings.h"
#include "server/base/strict_toml.h"
#include "server/base/target_text.h"

namespace hearthfront::server {
namespace {

constexpr std::size_t longest_list = 50;

// The one list of options of each kind: reading and listing both go through it. A visitor is called with
// (key, the option, lower limit, upper limit); limits are bytes for texts.
template <typename AnyWebhook, typename Visitor>
void each_webhook_option(AnyWebhook& to, Visitor&& visit) {
  visit("url", to.url, 1, 1000);
  visit("secret_file", to.secret_file, 1, 1000);
  visit("ca_file", to.ca_file, 0, 1000);
}
template <typename AnyMail, typename Visitor>
void each_mail_option(AnyMail& to, Visitor&& visit) {
  visit("server", to.server, 1, 253);
  visit("port", to.port, 1, 65'535);
  visit("tls", to.tls, 1, 10);
  visit("ca_file", to.ca_file, 0, 1000);
  visit("user", to.user, 0, 200);
  visit("password_file", to.password_file, 0, 1000);
  visit("from", to.from, 1, 254);
  visit("to", to.to, 1, 254);
}
template <typename AnyMqtt, typename Visitor>
void each_mqtt_option(AnyMqtt& to, Visitor&& visit) {
  visit("host", to.host, 1, 253);
  visit("port", to.port, 1, 65'535);
  visit("topic", to.topic, 1, 200);
  visit("tls", to.tls, 0, 1);
  visit("ca_file", to.ca_file, 0, 1000);
  visit("user", to.user, 0, 200);
  visit("password_file", to.password_file, 0, 1000);
  visit("client_id", to.client_id, 0, 100);
  visit("protocol", to.protocol, 1, 5);
}
template <typename AnyTarget, typename Visitor>
void each_common_option(AnyTarget& target, Visitor&& visit) {
  visit("furnaces", target.furnaces, 1, 60);
  visit("kinds", target.kinds, 1, 60);
  visit("least_severity", target.least_severity, 1, 20);
  visit("after_unacknowledged_min", target.after_unacknowledged_min, 0, 1440);
  visit("timeout_s", target.timeout_s, 1, 120);
  visit("attempts_limit", target.attempts_limit, 1, 1000);
}
template <typename AnyTarget, typename Visitor>
void each_own_option(AnyTarget& target, Visitor&& visit) {
  if (auto* webhook = std::get_if<WebhookTarget>(&target.to)) each_webhook_option(*webhook, visit);
  if (auto* mail = std::get_if<MailTarget>(&target.to)) each_mail_option(*mail, visit);
  if (auto* mqtt = std::get_if<MqttTarget>(&target.to)) each_mqtt_option(*mqtt, visit);
}

void read_option(ConfigTable& table, std::string_view key, std::string& into, int low, int high) {
  table.text(key, into, static_cast<std::size_t>(low), static_cast<std::size_t>(high));
}
void read_option(ConfigTable& table, std::string_view key, int& into, int low, int high) {
  std::int64_t value = into;
  if (table.integer(key, value, low, high)) into = static_cast<int>(value);
}
void read_option(ConfigTable& table, std::string_view key, bool& into, int, int) {
  table.boolean(key, into);
}
void read_option(ConfigTable& table, std::string_view key, std::vector<std::string>& into, int, int high) {
  table.texts(key, into, longest_list, static_cast<std::size_t>(high));
}

std::string toml_text(const std::string& value) {
  return '"' + value + '"';
}
std::string toml_text(int value) {
  return std::to_string(value);
}
std::string toml_text(bool value) {
  return value ? "true" : "false";
}
std::string toml_text(const std::vector<std::string>& values) {
  std::string text;
  for (const std::string& value : values) text += (text.empty() ? "" : ", ") + toml_text(value);
  return '[' + text + ']';
}

void require_one_of(ConfigTable& table, const char* key, const std::string& value,
                    const std::vector<std::string>& allowed) {
  if (std::find(allowed.begin(), allowed.end(), value) != allowed.end()) return;
  std::string words;
  for (const std::string& word : allowed)
    words += (words.empty() ? "\"" : word == allowed.back() ? "\" or \"" : "\", \"") + word;
  table.fault(key, "expected " + words + "\", got \"" + value + "\"");
}

void check_sign_in(ConfigTable& table, const std::string& user, const std::string& password_file) {
  if (user.empty() != password_file.empty())
    table.fault(user.empty() ? "password_file" : "user",
                "user and password_file go together: set both or none");
}

void check_own(ConfigTable& table, WebhookTarget& to) {
  table.require("url", "the address that gets the POST, such as \"https://alarms.example/hook\"");
  table.require("secret_file", "a file with the key (16 bytes or more) that signs each message");
  if (to.url.empty()) return;
  if (const std::string fault = url_fault(to.url); !fault.empty()) table.fault("url", fault);
}

void check_own(ConfigTable& table, MailTarget& to) {
  table.require("server", "the SMTP server");
  table.require("from", "the sender's address");
  table.require("to", "the addresses that get the mail");
  require_one_of(table, "tls", to.tls, {"starttls", "tls", "none"});
  if (!to.server.empty() && !is_host_name(to.server))
    table.fault("server", "expected a host name or an IP address, got \"" + to.server + "\"");
  if (to.tls == "none" && !to.server.empty() && !is_loopback_host(to.server))
    table.fault(
        "tls", "\"none\" would send mail and password in the clear; it is only for a server on this machine");
  if (!to.from.empty() && !is_mail_address(to.from))
    table.fault("from", "expected an address such as \"furnaces@shop.example\", got \"" + to.from + "\"");
  for (const std::string& address : to.to)
    if (!is_mail_address(address))
      table.fault("to", "expected addresses such as \"shift@shop.example\", got \"" + address + "\"");
  if (table.has_empty_array("to")) table.fault("to", "needs one address at least");
  check_sign_in(table, to.user, to.password_file);
}

void check_own(ConfigTable& table, MqttTarget& to) {
  table.require("host", "the broker");
  require_one_of(table, "protocol", to.protocol, {"5", "3.1.1"});
  if (!to.host.empty() && !is_host_name(to.host))
    table.fault("host", "expected a host name or an IP address, got \"" + to.host + "\"");
  // MQTT 3.1.1 (OASIS), 4.7.1 and 4.7.2: wildcards are for filters, "$" topics belong to the broker.
  if (to.topic.find_first_of("+#") != std::string::npos || to.topic.front() == '$')
    table.fault("topic", "must not hold + or # nor begin with $, got \"" + to.topic + "\"");
  if (!to.ca_file.empty() && !to.tls) table.fault("ca_file", "is only used with tls = true");
  check_sign_in(table, to.user, to.password_file);
}

bool is_target_name(const std::string& name) {
  return !name.empty() && name.size() <= 40 && std::all_of(name.begin(), name.end(), [](char c) {
    return (c >= 'a' && c <= 'z') || (c >= '0' && c <= '9') || c == '-' || c == '_';
  });
}

void absolute(std::string& file, const Settings& settings) {
  if (!file.empty()) file = settings.path_of(file);
}

DeliveryTarget read_target(ConfigTable& table, const Settings& settings) {
  DeliveryTarget target;
  target.place = table.where("name");
  std::string kind;
  table.text("name", target.name, 1, 100);
  table.text("kind", kind, 1, 100);
  table.require("name", "a word by which the target is called");
  table.require("kind", "\"webhook\", \"mail\" or \"mqtt\"");
  if (!target.name.empty() && !is_target_name(target.name)) {
    table.fault("name", "expected up to 40 of a-z, 0-9, - and _, got \"" + target.name + "\"");
  }
  if (!kind.empty()) require_one_of(table, "kind", kind, {"webhook", "mail", "mqtt"});
  if (kind == "mail") target.to = MailTarget{};
  if (kind == "mqtt") target.to = MqttTarget{};
  const auto read = [&](const char* key, auto& into, int low, int high) {
    read_option(table, key, into, low, high);
  };
  each_common_option(target, read);
  require_one_of(table, "least_severity", target.least_severity, {"note", "warning", "urgent"});
  // Without a known kind nobody can say which keys belong here.
  if (kind != "webhook" && kind != "mail" && kind != "mqtt") return target;
  each_own_option(target, read);
  std::visit([&](auto& to) { check_own(table, to); }, target.to);
  table.finish();
  if (auto* webhook = std::get_if<WebhookTarget>(&target.to)) {
    absolute(webhook->secret_file, settings);
    absolute(webhook->ca_file, settings);
  } else if (auto* mail = std::get_if<MailTarget>(&target.to)) {
    absolute(mail->password_file, settings);
    absolute(mail->ca_file, settings);
  } else if (auto* mqtt = std::get_if<MqttTarget>(&target.to)) {
    absolute(mqtt->password_file, settings);
    absolute(mqtt->ca_file, settings);
    if (mqtt->client_id.empty()) mqtt->client_id = "hearthfront-" + target.name;
  }
  return target;
}

}  // namespace

const char* DeliveryTarget::kind() const {
  const char* const words[] = {"webhook", "mail", "mqtt"};
  return words[to.index()];
}

std::string DeliveryTarget::where() const {
  if (const auto* webhook = std::get_if<WebhookTarget>(&to)) return shown_url(webhook->url);
  if (const auto* mail = std::get_if<MailTarget>(&to)) {
    std::string addresses;
    for (const std::string& address : mail->to) addresses += (addresses.empty() ? "" : ", ") + address;
    return addresses + " by " + mail->server + ":" + std::to_string(mail->port);
  }
  const auto& mqtt = std::get<MqttTarget>(to);
  return mqtt.host + ":" + std::to_string(mqtt.port) + "/" + mqtt.topic;
}

std::vector<DeliveryTarget> read_targets(ConfigTable& root, const Settings& settings) {
  std::vector<DeliveryTarget> targets;
  for (ConfigTable& table : root.tables("target")) {
    DeliveryTarget target = read_target(table, settings);
    if (std::any_of(targets.begin(), targets.end(), [&](const DeliveryTarget& other) {
          return !target.name.empty() && other.name == target.name;
        }))
      table.fault("name", "there is another target \"" + target.name + "\"");
    targets.push_back(std::move(target));
  }
  return targets;
}

void check_targets(const std::vector<DeliveryTarget>& targets, const Plant& plant,
                   const std::vector<std::string>& kinds, ConfigErrors& errors) {
  std::vector<std::string> furnaces;
  for (const Furnace& furnace : plant.furnaces) furnaces.push_back(furnace.id);
  const auto refuse_unknown = [&](const DeliveryTarget& target, const std::vector<std::string>& named,
                                  const std::vector<std::string>& known, const char* what) {
    for (const std::string& word : named) {
      if (std::find(known.begin(), known.end(), word) != known.end()) continue;
      errors.messages.push_back(target.place + ": target \"" + target.name + "\": there is no " + what +
                                " \"" + word + "\"" + suggestion(word, known));
    }
  };
  for (const DeliveryTarget& target : targets) {
    refuse_unknown(target, target.furnaces, furnaces, "furnace");
    refuse_unknown(target, target.kinds, kinds, "kind of alert");
  }
}

std::vector<std::pair<std::string, std::string>> list_target_options(const DeliveryTarget& target) {
  std::vector<std::pair<std::string, std::string>> options{{"name", toml_text(target.name)},
                                                           {"kind", toml_text(std::string(target.kind()))}};
  const auto list = [&](const char* key, const auto& value, int, int) {
    options.emplace_back(key, toml_text(value));
  };
  each_own_option(target, list);
  each_common_option(target, list);
  return options;
}

}  // namespace hearthfront::server
