// The settings file: strict reading, and the shipped file as the mirror of the defaults in code.
// Expected messages are our own contract: common practice, no source.
#include "server/base/settings.h"

#include <doctest/doctest.h>

#include <map>

#include "server/base/strict_toml.h"
#include "server/base/time_text.h"
#include "server/settings_support.h"

using namespace hearthfront::server;
using hearthfront::test::joined;
using hearthfront::test::ScratchFolder;

namespace {

std::string faults_of(std::string_view text) {
  const ScratchFolder folder;
  ConfigErrors errors;
  read_settings(folder.write("s.toml", text), errors);
  return joined(errors.messages, folder);
}

const std::string shipped = std::string(HF_SOURCE_DIR) + "/config/hearthfront.toml";

}  // namespace

TEST_CASE("the shipped settings file has every option of the code, each at its default, and no other") {
  ConfigErrors errors;
  const Settings read = read_settings(shipped, errors);
  CHECK(errors.messages == std::vector<std::string>{});   // file -> code: no unknown key
  CHECK(list_options(read) == list_options(Settings{}));  // every value equal

  // code -> file: every option is written out, not only left to its default.
  const auto tree = parse_toml_file(shipped, errors);
  REQUIRE(tree);
  std::vector<std::string> written;
  for (const ConfigMember& table : tree->table) {
    for (const ConfigMember& option : table.value.table) written.push_back(table.key + "." + option.key);
  }
  std::vector<std::string> known;
  for (const auto& [name, value] : list_options(Settings{})) known.push_back(name);
  CHECK(written == known);
}

TEST_CASE("an empty settings file gives the defaults; a partial one changes what it names") {
  CHECK(faults_of("") == "");
  const ScratchFolder folder;
  ConfigErrors errors;
  const Settings settings =
      read_settings(folder.write("s.toml", "[ingest]\nfuture_tolerance_s = 5\n"), errors);
  CHECK(errors.ok());
  CHECK(settings.ingest.future_tolerance_s == 5.0);
  CHECK(settings.ingest.max_batch == 10'000);
}

TEST_CASE("relative file names start at the folder of the settings file") {
  const ScratchFolder folder;
  ConfigErrors errors;
  const Settings settings =
      read_settings(folder.write("s.toml", "[files]\nplant = \"/etc/plant.toml\"\n"), errors);
  CHECK(errors.ok());
  CHECK(settings.path_of(settings.files.database) == folder.path("hearthfront.db"));
  CHECK(settings.path_of(settings.files.plant) == "/etc/plant.toml");
  CHECK(Settings{}.path_of("a.db") == "a.db");
}

TEST_CASE("each mistake in the settings has one exact message") {
  struct Mistake {
    std::string text, message;
  };
  const Mistake mistakes[] = {
      {"[listen\n", "s.toml:1:8: not valid TOML: Error while parsing table header: expected ']', saw '\\n'"},
      {"[listen]\nport = 1\nport = 2\n",
       "s.toml:3:8: not valid TOML: Error while parsing key-value pair: cannot redefine existing integer "
       "'port'"},
      {"[listen]\nport = \"8473\"\n", "s.toml:2:8: port: expected an integer, got a string"},
      {"[listen]\nport = 8473.0\n", "s.toml:2:8: port: expected an integer, got a decimal number"},
      {"[listen]\nport = 70000\n", "s.toml:2:8: port: expected 0 to 65535, got 70000"},
      {"[listen]\nprot = 8473\n", "s.toml:2:1: [listen]: unknown key \"prot\" (did you mean \"port\"?)"},
      {"[listen]\nzzzzzz = 1\n", "s.toml:2:1: [listen]: unknown key \"zzzzzz\""},
      {"[lisen]\nport = 1\n", "s.toml:1:2: the file: unknown key \"lisen\" (did you mean \"listen\"?)"},
      {"listen = 4\n", "s.toml:1:10: listen: expected a table, got an integer"},
      {"[listen]\naddress = \"0.0.0.0\"\n",
       "s.toml:2:11: address: \"0.0.0.0\" can be reached from other machines, and there is no sign-in and no "
       "TLS "
       "yet; use 127.0.0.1 or ::1"},
      {"[listen]\naddress = \"::\"\n",
       "s.toml:2:11: address: \"::\" can be reached from other machines, and there is no sign-in and no TLS "
       "yet; "
       "use 127.0.0.1 or ::1"},
      {"[listen]\naddress = \"localhost\"\n",
       "s.toml:2:11: address: \"localhost\" is not an IP address; use 127.0.0.1 or ::1"},
      {"[files]\ndatabase = \"\"\n", "s.toml:2:12: database: must not be empty"},
      {"[files]\ndatabase = \"a\\nb\"\n",
       "s.toml:2:12: database: must not contain line breaks or other control characters"},
      {"[ingest]\nfuture_tolerance_s = true\n",
       "s.toml:2:22: future_tolerance_s: expected a number, got true or false"},
      {"[ingest]\nfuture_tolerance_s = nan\n",
       "s.toml:2:22: future_tolerance_s: expected 0 to 3600, got nan"},
      {"[ingest]\npast_limit_days = 0\n", "s.toml:2:19: past_limit_days: expected 1 to 3650, got 0"},
      {"[ingest]\nmax_body_bytes = -1\n", "s.toml:2:18: max_body_bytes: expected 1024 to 67108864, got -1"},
      {"[ingest]\nqueue_readings = 9999\n",
       "s.toml:2:18: queue_readings: must be at least max_batch (10000), or a full batch could never be "
       "taken"},
      {"[http]\nthreads = 1\n", "s.toml:2:11: threads: expected 2 to 256, got 1"},
      {"[live]\nstale_after_s = \"5 min\"\n", "s.toml:2:17: stale_after_s: expected a number, got a string"},
      {"[log]\nlevel = \"verbose\"\n",
       "s.toml:2:9: level: expected \"debug\", \"info\", \"warn\" or \"error\", got \"verbose\""},
      {"[clock]\nspeed = 0\n", "s.toml:2:9: speed: expected 0.1 to 3600, got 0"},
      {"[clock]\nanchor_real = \"yesterday\"\n",
       "s.toml:2:15: anchor_real: expected an RFC 3339 time such as \"2026-03-02T06:00:00Z\", or \"\": the "
       "date is "
       "not written YYYY-MM-DD"},
      {"[clock]\nspeed = 120\n",
       "s.toml:2:9: speed: a clock that does not show real time needs both anchor_real and anchor_data, or "
       "data "
       "time would jump at each restart"},
  };
  for (const Mistake& mistake : mistakes) {
    CAPTURE(mistake.text);
    CHECK(faults_of(mistake.text) == mistake.message);
  }
}

TEST_CASE("all mistakes of a file are told at once") {
  CHECK(faults_of("[listen]\nport = -1\nhost = \"a\"\n[http]\nthreads = 0\n[extra]\n") ==
        "s.toml:2:8: port: expected 0 to 65535, got -1\n"
        "s.toml:5:11: threads: expected 2 to 256, got 0\n"
        "s.toml:3:1: [listen]: unknown key \"host\"\n"
        "s.toml:6:2: the file: unknown key \"extra\"");
}

TEST_CASE("a settings file that cannot be read says why") {
  const ScratchFolder folder;
  ConfigErrors errors;
  read_settings(folder.path("none.toml"), errors);
  read_settings(folder.path("."), errors);
  read_settings(folder.write("large.toml", std::string((1u << 20) + 1, '#')), errors);
  CHECK(joined(errors.messages, folder) ==
        "none.toml: cannot be read: No such file or directory\n"
        ".: cannot be read: it is a folder\n"
        "large.toml: is larger than 1 MiB, so it is hardly the right file");
}

TEST_CASE("loopback addresses of both families are taken") {
  CHECK(faults_of("[listen]\naddress = \"::1\"\n") == "");
  CHECK(faults_of("[listen]\naddress = \"127.0.0.2\"\n") == "");
}

TEST_CASE("a clock that does not show real time is refused unless the plant is a demo") {
  const ScratchFolder folder;
  ConfigErrors errors;
  const Settings settings =
      read_settings(folder.write("s.toml",
                                 "[clock]\nspeed = 120\nanchor_real = \"2026-03-02T06:00:00Z\"\n"
                                 "anchor_data = \"2026-01-01T00:00:00+01:00\"\n"),
                    errors);
  REQUIRE(errors.ok());
  CHECK(settings.clock.is_scaled());

  Plant plant;
  plant.demo = true;
  check_clock_is_allowed(settings, plant, errors);
  CHECK(errors.ok());

  plant.demo = false;
  check_clock_is_allowed(settings, plant, errors);
  CHECK(
      joined(errors.messages, folder) ==
      "s.toml:2:9: [clock]: a clock that does not show real time (speed 120) is only for a plant file marked "
      "demo = true; this one is not, so nobody may take its values for the state of a real furnace");

  Settings open_to_all = settings;
  open_to_all.listen.address = "0.0.0.0";
  plant.demo = true;
  ConfigErrors others;
  check_clock_is_allowed(open_to_all, plant, others);
  CHECK(joined(others.messages, folder) ==
        "s.toml:2:9: [clock]: a clock that does not show real time is only for a loopback listener");

  ConfigErrors none;
  check_clock_is_allowed(Settings{}, Plant{}, none);
  CHECK(none.ok());
}
