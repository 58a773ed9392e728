// Where alerts are sent: the [[target]] tables of the settings file as plain data. Secrets (keys, passwords)
// are never in it, only the names of the files that hold them.
#pragma once

#include <string>
#include <utility>
#include <variant>
#include <vector>

#include "server/base/plant.h"

namespace hearthfront::server {

class ConfigTable;
struct Settings;

// A signed HTTP POST.
struct WebhookTarget {
  std::string url;          // http or https, without user and password
  std::string secret_file;  // key of the signature, 16 to 4096 bytes
  std::string ca_file;      // authorities to trust instead of the system's; empty: the system's
};

// An e-mail by SMTP.
struct MailTarget {
  std::string server;
  int port = 587;
  std::string tls = "starttls";  // or "tls"; "none" only to a loopback server
  std::string user;              // empty: no sign-in
  std::string password_file;
  std::string from;
  std::vector<std::string> to;
  std::string ca_file;
};

// A message to an MQTT broker, QoS 1.
struct MqttTarget {
  std::string host;
  int port = 1883;
  std::string topic = "hearthfront/alerts";
  bool tls = false;
  std::string ca_file;
  std::string user;  // empty: no sign-in
  std::string password_file;
  std::string client_id;       // empty: "hearthfront-" and the target's name
  std::string protocol = "5";  // or "3.1.1", whose brokers cannot tell that a message was refused
};

struct DeliveryTarget {
  std::string name;
  // What it is told; an empty list means all. A target with furnaces is not told what belongs to none.
  std::vector<std::string> furnaces, kinds;
  std::string least_severity = "note";  // or "warning", "urgent"
  int after_unacknowledged_min = 0;     // 0: told at once; else only what nobody acknowledged for so long
  int timeout_s = 10;                   // for one try
  int attempts_limit = 20;              // failed tries; then it is stuck until a person has it tried again
  std::variant<WebhookTarget, MailTarget, MqttTarget> to;
  std::string place;  // file:line:column, for later messages

  const char* kind() const;   // "webhook", "mail", "mqtt"
  std::string where() const;  // for people: host and path, without query; or addresses
};

// All [[target]] tables of the file; faults go to `errors`. File names start at the settings' folder.
std::vector<DeliveryTarget> read_targets(ConfigTable& root, const Settings& settings);

// Furnaces and alert kinds that targets name must exist; `kinds` are those that rules can raise.
void check_targets(const std::vector<DeliveryTarget>& targets, const Plant& plant,
                   const std::vector<std::string>& kinds, ConfigErrors& errors);

// Every option of the target's kind with its value in TOML text, in the order of the shipped file.
std::vector<std::pair<std::string, std::string>> list_target_options(const DeliveryTarget& target);

}  // namespace hearthfront::server
