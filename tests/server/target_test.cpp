// [[target]] tables of the settings: strict reading, and the shipped examples as the mirror of the code.
// Expected messages are our own contract: common practice, no source.
#include "server/base/target.h"

#include <doctest/doctest.h>

#include <fstream>

#include "server/base/settings.h"
#include "server/base/strict_toml.h"
#include "server/base/target_text.h"
#include "server/live_support.h"
#include "server/settings_support.h"

using namespace hearthfront::server;
using hearthfront::test::joined;
using hearthfront::test::ScratchFolder;

namespace {

std::string faults_of(const std::string& text) {
  const ScratchFolder folder;
  ConfigErrors errors;
  read_settings(folder.write("s.toml", text), errors);
  return joined(errors.messages, folder);
}

const std::string hook =
    "[[target]]\nname = \"a\"\nkind = \"webhook\"\nurl = \"https://x.example/\"\nsecret_file = \"k\"\n";
const std::string mail =
    "[[target]]\nname = \"a\"\nkind = \"mail\"\nserver = \"m.example\"\nfrom = \"f@x.example\"\nto = "
    "[\"t@x.example\"]\n";
const std::string mqtt = "[[target]]\nname = \"a\"\nkind = \"mqtt\"\nhost = \"b.example\"\n";

// The examples of the shipped file without their "# ".
std::string shipped_examples() {
  std::ifstream in(std::string(HF_SOURCE_DIR) + "/config/hearthfront.toml");
  std::string text;
  bool inside = false;
  for (std::string line; std::getline(in, line);) {
    inside = inside || line == "# [[target]]";
    if (inside) text += line.size() > 2 ? line.substr(2) + "\n" : "\n";
  }
  return text;
}

}  // namespace

TEST_CASE(
    "the examples of the shipped settings are valid, and show every option of their kind at its default") {
  const ScratchFolder folder;
  ConfigErrors errors;
  const std::string path = folder.write("s.toml", shipped_examples());
  const Settings settings = read_settings(path, errors);
  CHECK(joined(errors.messages, folder) == "");
  REQUIRE(settings.targets.size() == 3);
  const auto tree = parse_toml_file(path, errors);
  REQUIRE(tree);
  const std::string without_default[] = {"name",          "kind", "url", "secret_file", "server",   "user",
                                         "password_file", "from", "to",  "host",        "client_id"};
  for (std::size_t i = 0; i < 3; ++i) {
    const DeliveryTarget& target = settings.targets[i];
    CAPTURE(target.name);
    std::vector<std::string> written, known;
    for (const ConfigMember& option : tree->table[0].value.array[i].table) written.push_back(option.key);
    for (const auto& option : list_target_options(target)) known.push_back(option.first);
    CHECK(written == known);
    DeliveryTarget plain;
    if (i == 1) plain.to = MailTarget{};
    if (i == 2) plain.to = MqttTarget{};
    const auto shown = list_target_options(target), defaults = list_target_options(plain);
    for (std::size_t k = 0; k < shown.size(); ++k)
      if (std::find(std::begin(without_default), std::end(without_default), shown[k].first) ==
          std::end(without_default))
        CHECK(shown[k] == defaults[k]);
  }
  CHECK(settings.targets[0].kind() == std::string("webhook"));
  CHECK(std::get<WebhookTarget>(settings.targets[0].to).secret_file == folder.path("alarm.key"));
}

TEST_CASE("each mistake in a target has one exact message") {
  struct Mistake {
    std::string text, message;
  };
  const Mistake mistakes[] = {
      {hook, ""},
      {mail, ""},
      {mqtt, ""},
      {"[[target]]\n",
       "s.toml:1:1: [[target]]: name is missing: a word by which the target is called\n"
       "s.toml:1:1: [[target]]: kind is missing: \"webhook\", \"mail\" or \"mqtt\""},
      {"[target]\n", "s.toml:1:1: target: expected an array of tables, [[target]] or [{...}], got a table"},
      {"[[target]]\nname = \"a\"\nkind = \"pager\"\n",
       "s.toml:3:8: kind: expected \"webhook\", \"mail\" or \"mqtt\", got \"pager\""},
      {"[[target]]\nname = \"A b\"\nkind = \"mqtt\"\nhost = \"h\"\n",
       "s.toml:2:8: name: expected up to 40 of a-z, 0-9, - and _, got \"A b\""},
      {hook + hook, "s.toml:7:8: name: there is another target \"a\""},
      {hook + "least_severity = \"loud\"\n",
       "s.toml:6:18: least_severity: expected \"note\", \"warning\" or \"urgent\", got \"loud\""},
      {hook + "attempts_limit = 0\n", "s.toml:6:18: attempts_limit: expected 1 to 1000, got 0"},
      {hook + "topic = \"t\"\n", "s.toml:6:1: [[target]]: unknown key \"topic\""},
      {hook + "urls = \"t\"\n", "s.toml:6:1: [[target]]: unknown key \"urls\" (did you mean \"url\"?)"},
      {"[[target]]\nname = \"a\"\nkind = \"webhook\"\nsecret_file = \"k\"\nurl = "
       "\"https://u:p@x.example/\"\n",
       "s.toml:5:7: url: must not hold a user or password: nothing secret belongs into the settings; "
       "messages are "
       "signed with the key in secret_file"},
      {"[[target]]\nname = \"a\"\nkind = \"webhook\"\nurl = \"https://x.example/\"\n",
       "s.toml:1:1: [[target]]: secret_file is missing: a file with the key (16 bytes or more) that signs "
       "each "
       "message"},
      {mail + "tls = \"none\"\n",
       "s.toml:7:7: tls: \"none\" would send mail and password in the clear; it is only for a server on this "
       "machine"},
      {mail + "user = \"u\"\n", "s.toml:7:8: user: user and password_file go together: set both or none"},
      {"[[target]]\nname = \"a\"\nkind = \"mail\"\nserver = \"127.0.0.1\"\ntls = \"none\"\nfrom = "
       "\"f@x.example\"\nto = [\"<t@x>\"]\n",
       "s.toml:7:6: to: expected addresses such as \"shift@shop.example\", got \"<t@x>\""},
      {"[[target]]\nname = \"a\"\nkind = \"mail\"\nserver = \"m.example\"\nfrom = \"f@x.example\"\nto = []\n",
       "s.toml:6:6: to: needs one address at least"},
      {mqtt + "topic = \"a/#\"\n", "s.toml:5:9: topic: must not hold + or # nor begin with $, got \"a/#\""},
      {mqtt + "protocol = \"4\"\n", "s.toml:5:12: protocol: expected \"5\" or \"3.1.1\", got \"4\""},
      {mqtt + "ca_file = \"c\"\n", "s.toml:5:11: ca_file: is only used with tls = true"},
  };
  for (const Mistake& mistake : mistakes) {
    CAPTURE(mistake.text);
    CHECK(faults_of(mistake.text) == mistake.message);
  }
}

TEST_CASE("furnaces and kinds that a target names must exist") {
  DeliveryTarget target;
  target.name = "a";
  target.place = "s.toml:2:8";
  target.furnaces = {"f1", "f2"};
  target.kinds = {"gap", "gapp"};
  ConfigErrors errors;
  check_targets({target}, test::small_plant(), {"gap", "disk"}, errors);
  CHECK(errors.messages ==
        std::vector<std::string>{
            "s.toml:2:8: target \"a\": there is no furnace \"f2\" (did you mean \"f1\"?)",
            "s.toml:2:8: target \"a\": there is no kind of alert \"gapp\" (did you mean \"gap\"?)"});
}

TEST_CASE("addresses of mail are plain addr-specs") {
  // RFC 5322 3.4.1 with a dot-atom; RFC 5321 4.5.3.1 limits the local part to 64 and the whole to 254
  // (erratum 1690).
  for (const char* good : {"a@b", "first.last@shop.example", "a+tag@x-y.example", "o'neil@x.example"})
    CHECK(is_mail_address(good));
  const std::string bad[] = {
      "",      "a",         "@x",   "a@",      ".a@x",        "a.@x",  "a..b@x",
      "a b@x", "a@x y",     "a@@x", "a@x\r\n", "a@x\nBcc: b", "<a@x>", "A <a@x>",
      "a,b@x", "\"a b\"@x", "a@x.", "a@-x",    "h\xc3\xa4@x", "a@::1", std::string(65, 'a') + "@x"};
  for (const std::string& each : bad) CHECK_FALSE(is_mail_address(each));
}

TEST_CASE("addresses of webhooks are http or https, whole and without secrets") {
  for (const char* good : {"http://x", "https://x.example/", "https://x.example:8443/a/b?c=d",
                           "http://[::1]:80/", "http://127.0.0.1/a%20b"})
    CHECK(url_fault(good) == "");
  for (const char* bad : {"", "x.example", "ftp://x", "http://", "http:///a", "http://x y/", "http://x:0/",
                          "http://x:99999/", "http://x:/", "http://u@x/", "http://[::1/", "http://[x]/",
                          "http://x/\r\nHost: y", "http://x/#a", "HTTP://x", "file:///etc/passwd"})
    CHECK(url_fault(bad) != "");
  CHECK(shown_url("https://x.example:8443/a/b?token=secret") == "x.example:8443/a/b");
}
