// One bad plant or steel file for each mistake, with its exact message. Common practice, no source.
#include <doctest/doctest.h>

#include "server/base/plant.h"
#include "server/settings_support.h"

using namespace hearthfront::server;
using hearthfront::test::joined;
using hearthfront::test::ScratchFolder;

namespace {

const std::string good_steel = "[[steel]]\nid = \"S\"\ncomposition_wt_pct = {C = 0.2}\n";

std::string faults_of(const std::string& plant, const std::string& steels = good_steel) {
  const ScratchFolder folder;
  ConfigErrors errors;
  read_plant(folder.write("p.toml", plant), folder.write("s.toml", steels), errors);
  return joined(errors.messages, folder);
}

struct Mistake {
  std::string text, message;
};

// Lines 1 to 3 of a plant that is good so far.
const std::string head = "[plant]\nname = \"A\"\n[[furnace]]\n";
// Lines 1 to 8: with a furnace of one channel.
const std::string one =
    head + "id = \"f\"\n[[furnace.channel]]\nname = \"t\"\nrole = \"temperature\"\nunit = \"degC\"\n";
// Lines 9 to 11, then the mistake in line 12.
const std::string csv = one + "[[furnace.csv]]\nname = \"m\"\ntime_column = \"Time\"\n";
const std::string columns = "columns = [{column = \"T\", channel = \"t\"}]\n";

void check_all(const std::string& before, const std::vector<Mistake>& mistakes,
               const std::string& after = {}) {
  for (const Mistake& mistake : mistakes) {
    CAPTURE(mistake.text);
    CHECK(faults_of(before + mistake.text + after) == mistake.message);
  }
}

}  // namespace

TEST_CASE("the texts that the tables below build on are good") {
  CHECK(faults_of(one) == "");
  CHECK(faults_of(csv + columns) == "");
}

TEST_CASE("mistakes in the plant as a whole") {
  check_all("",
            {
                {"",
                 "p.toml:1:1: the file: plant is missing: it names the plant and says whether it is a demo\n"
                 "p.toml:1:1: the file: furnace is missing: at least one [[furnace]] is needed"},
                {"[plant]\n[[furnace]]\nid = \"f\"\n",
                 "p.toml:1:1: [plant]: name is missing: it heads every page and report\n"
                 "p.toml:2:1: [[furnace]]: channel is missing: without a [[furnace.channel]] nothing can be "
                 "read from it"},
                {"[plant]\nname = \"A\"\ndemo = \"yes\"\n[furnace]\nid = \"f\"\n",
                 "p.toml:3:8: demo: expected true or false, got a string\n"
                 "p.toml:4:1: furnace: expected an array of tables, [[furnace]] or [{...}], got a table"},
            });
}

TEST_CASE("mistakes in a furnace") {
  const std::string channel = "[[furnace.channel]]\nname = \"t\"\nrole = \"temperature\"\nunit = \"degC\"\n";
  check_all(head,
            {
                {"", "p.toml:3:1: [[furnace]]: id is missing: readings and loads name the furnace by it"},
                {"id = \"Pit 2\"\n", "p.toml:4:6: id: \"Pit 2\" may hold only a-z, 0-9 and, inside, - _ ."},
                {"id = \"..\"\n", "p.toml:4:6: id: \"..\" may hold only a-z, 0-9 and, inside, - _ ."},
                {"id = \"f\"\nprocess = \"vacuum\"\n",
                 "p.toml:5:11: process: expected \"gas carburizing\", got \"vacuum\""},
                {"id = \"f\"\nco_fraction = 20\n", "p.toml:5:15: co_fraction: expected 0.01 to 1, got 20"},
                {"id = \"f\"\nco_fraction = 0.7\n",
                 "p.toml:5:15: co_fraction: co_fraction and h2_fraction together exceed 1; give mole "
                 "fractions, 0.20 for 20 %"},
                {"id = \"f\"\nbeta_m_per_s = 0.125\n",
                 "p.toml:5:16: beta_m_per_s: expected 1e-09 to 1e-05, got 0.125"},
                {"id = \"f\"\nlag_min = -1\n", "p.toml:5:11: lag_min: expected 0 to 600, got -1"},
                {"id = \"f\"\ndiffusivity = \"best\"\n",
                 "p.toml:5:15: diffusivity: expected \"agren\" or \"tibbetts\", got \"best\""},
                {"id = \"f\"\nchambers = []\n",
                 "p.toml:5:12: chambers: a furnace has at least one chamber; leave the key out for one\n"
                 "p.toml:6:1: [[channel]]: the furnace has no chamber to put it in"},
                {"id = \"f\"\nchambers = [{id = \"a\"}, {id = \"a\"}]\n",
                 "p.toml:5:31: id: \"a\" is taken already\n"
                 "p.toml:6:1: [[channel]]: chamber is missing: the furnace has several: \"a\" or \"a\""},
                {"id = \"f\"\nlag = 3\n", "p.toml:5:1: [[furnace]]: unknown key \"lag\""},
                {"id = \"f\"\nlag_mn = 3\n",
                 "p.toml:5:1: [[furnace]]: unknown key \"lag_mn\" (did you mean \"lag_min\"?)"},
            },
            channel);
  CHECK(faults_of(one + "[[furnace]]\nid = \"f\"\n" + channel) == "p.toml:10:6: id: \"f\" is taken already");
}

TEST_CASE("mistakes in a channel") {
  const std::string start = one + "[[furnace.channel]]\n";  // line 9
  check_all(
      start,
      {
          {"name = \"t\"\nrole = \"load_temperature\"\nunit = \"degC\"\n",
           "p.toml:10:8: name: \"t\" is taken already"},
          {"name = \"u\"\nrole = \"temperature\"\nunit = \"degC\"\n",
           "p.toml:11:8: role: channel \"t\" is already the temperature of chamber \"main\"; one channel for "
           "each role "
           "and chamber"},
          {"name = \"u\"\nrole = \"carbon potential\"\nunit = \"wt_pct\"\n",
           "p.toml:11:8: role: expected \"temperature\", \"load_temperature\", \"probe_temperature\", "
           "\"probe_emf\", "
           "\"carbon_potential\", \"co\", \"h2\", \"co2\", \"dew_point\", \"pressure\" or \"push\", got "
           "\"carbon potential\" (did you mean \"carbon_potential\"?)"},
          {"name = \"u\"\nrole = \"co\"\nunit = \"wt_pct\"\n",
           "p.toml:12:8: unit: co is given in \"vol_pct\", not in \"wt_pct\""},
          {"name = \"u\"\nrole = \"load_temperature\"\nunit = \"K\"\n",
           "p.toml:12:8: unit: load_temperature is given in \"degC\" or \"degF\", not in \"K\""},
          {"name = \"u\"\nrole = \"probe_emf\"\n",
           "p.toml:9:1: [[channel]]: unit is missing: probe_emf is given in \"mV\""},
          {"role = \"probe_emf\"\nunit = \"mV\"\n",
           "p.toml:9:1: [[channel]]: name is missing: readings name the channel by it"},
          {"name = \"u\"\nunit = \"mV\"\n",
           "p.toml:9:1: [[channel]]: role is missing: it tells the model what the channel measures"},
          {"name = \"u\"\nrole = \"probe_emf\"\nunit = \"mV\"\nlow = 1300\nhigh = 0\n",
           "p.toml:13:7: low: low (1300) must be below high (0)"},
          {"name = \"u\"\nrole = \"probe_emf\"\nunit = \"mV\"\nlow = \"0\"\n",
           "p.toml:13:7: low: expected a number, got a string"},
          {"name = \"u\"\nrole = \"probe_emf\"\nunit = \"mV\"\nexpected_interval_s = 0\n",
           "p.toml:13:23: expected_interval_s: expected 0.1 to 86400, got 0"},
          {"name = \"u\"\nrole = \"probe_emf\"\nunit = \"mV\"\ngap_limit_s = 30\n",
           "p.toml:13:15: gap_limit_s: below expected_interval_s every reading would be followed by a gap"},
          {"name = \"u\"\nrole = \"probe_emf\"\nunit = \"mV\"\nhold_limit_s = 60\n",
           "p.toml:13:16: hold_limit_s: must be at least gap_limit_s (300): a value is held only after the "
           "gap began"},
          {"name = \"u\"\nrole = \"probe_emf\"\nunit = \"mV\"\nchamber = \"hot\"\n",
           "p.toml:13:11: chamber: the furnace has no chamber \"hot\"; it has \"main\""},
          {"name = \"u\"\nrole = \"probe_emf\"\nunit = \"mV\"\nlows = 0\n",
           "p.toml:13:1: [[channel]]: unknown key \"lows\" (did you mean \"low\"?)"},
      });
}

TEST_CASE("mistakes in a logger mapping") {
  check_all(
      csv,
      {
          {"separator = \"::\"\n",
           "p.toml:12:13: separator: expected \",\", \";\", \"|\", \"\\t\", \"spaces\" or \"wide_spaces\""},
          {"encoding = \"latin1\"\n",
           "p.toml:12:12: encoding: expected auto, utf-8, utf-16, utf-16-le, utf-16-be, windows-1252 or "
           "iso-8859-1"},
          {"thousands = \"_\"\n", "p.toml:12:13: thousands: expected \".\", \",\", \"'\" or \" \""},
          {"thousands = \".\"\n", "p.toml:12:13: thousands: is the decimal sign as well"},
          {"thousands = \",\"\n", "p.toml:12:13: thousands: is the separator as well"},
          {"time_zone = \"Europe/Berln\"\n",
           "p.toml:12:13: time_zone: no time zone is called \"Europe/Berln\" (did you mean "
           "\"Europe/Berlin\"?); expected a name such as \"Europe/Berlin\" or \"America/Chicago\""},
          {"time_zone = \"Europe/Berlin\"\nutc_offset_min = 60\n",
           "p.toml:13:18: utc_offset_min: give either time_zone or utc_offset_min, not both"},
          {"date_column = \"Time\"\n",
           "p.toml:12:15: date_column: is the time column as well; leave it out where one column holds both"},
          {"date_column = \"Date\"\ntime_format = \"epoch_s\"\n",
           "p.toml:12:15: date_column: time_format = \"epoch_s\" holds the day already"},
          {"no_value = [\"---\", 5]\n", "p.toml:12:20: no_value: expected words, got an integer"},
          {"decimal = \"'\"\n", "p.toml:12:11: decimal: expected \".\" or \",\""},
          {"decimal = \",\"\n",
           "p.toml:12:11: decimal: separator and decimal sign are the same, so a number cannot be told from "
           "two columns"},
          {"utc_offset_min = 900\n", "p.toml:12:18: utc_offset_min: expected -720 to 840, got 900"},
          {"utc_offset_min = 1.5\n",
           "p.toml:12:18: utc_offset_min: expected an integer, got a decimal number"},
          {"header_lines = 0\n",
           "p.toml:11:15: time_column: header_lines = 0, so columns have no names; use \"#1\" for the first\n"
           "p.toml:13:22: column: header_lines = 0, so columns have no names; use \"#3\" for the third"},
          {"time_format = \"%d.%m.%Y\"\n", "p.toml:12:15: time_format: needs either %H or %I for the hour"},
          {"time_format = \"%d.%B.%Y %H:%M\"\n",
           "p.toml:12:15: time_format: %B is not known; use %Y %y %m %b %d %H %I %p %M %S %f %z %F %T, or "
           "\"iso\", \"epoch_s\", \"epoch_ms\", \"serial_day\""},
          {"time_formt = \"iso\"\n",
           "p.toml:12:1: [[csv]]: unknown key \"time_formt\" (did you mean \"time_format\"?)"},
      },
      columns);
  check_all(csv,
            {
                {"", "p.toml:9:1: [[csv]]: columns is missing: it says which column feeds which channel"},
                {"columns = []\n", "p.toml:12:11: columns: expected at least one {column, channel}"},
                {"columns = [{column = \"T\", channel = \"temp\"}]\n",
                 "p.toml:12:37: channel: the furnace has no channel \"temp\""},
                {"columns = [{column = \"T\", channel = \"t\"}, {column = \"U\", channel = \"t\"}]\n",
                 "p.toml:12:68: channel: \"t\" is taken already"},
                {"columns = [{column = \"T\", channel = \"t\", unit = \"mV\"}]\n",
                 "p.toml:12:49: unit: temperature is given in \"degC\", \"degF\" or \"K\", not in \"mV\""},
                {"columns = [{column = \"T\", channel = \"t\", factor = 0}]\n",
                 "p.toml:12:51: factor: must be a number other than 0"},
                {"columns = [{column = \"#0\", channel = \"t\"}]\n",
                 "p.toml:12:22: column: \"#0\": expected # and a number from 1 to 1000"},
                {"columns = [{channel = \"t\"}]\n",
                 "p.toml:12:12: [[columns]]: column is missing: it is the header text of the column, or "
                 "\"#3\" for the third"},
                {"columns = [\"T\"]\n", "p.toml:12:12: columns: expected a table, got a string"},
            });
  CHECK(faults_of(one + "[[furnace.csv]]\nname = \"m\"\n" + columns) ==
        "p.toml:9:1: [[csv]]: time_column is missing: without it readings have no time");
}

TEST_CASE("mistakes in the steel library") {
  const std::string start = "[[steel]]\nid = \"S\"\n";
  const Mistake mistakes[] = {
      {"", "s.toml:1:1: the file: steel is missing: at least one [[steel]] is needed"},
      {start,
       "s.toml:1:1: [[steel]]: composition_wt_pct is missing: the model needs the steel's composition"},
      {start + "composition_wt_pct = {Mn = 1}\n",
       "s.toml:3:22: [composition_wt_pct]: C is missing: it is the carbon of the core"},
      {start + "composition_wt_pct = {C = 0.8}\n", "s.toml:3:27: C: expected 0.05 to 0.35, got 0.8"},
      {start + "composition_wt_pct = {C = 0.2, V = 0.1}\n",
       "s.toml:3:32: [composition_wt_pct]: unknown key \"V\""},
      {start + "composition_wt_pct = {C = 0.2}\nrange_wt_pct = {C = [0.14, 0.19]}\n",
       "s.toml:3:27: C: 0.2 is outside the range 0.14 to 0.19 given in range_wt_pct"},
      {start + "composition_wt_pct = {C = 0.2}\nrange_wt_pct = {C = [0.23, 0.17]}\n",
       "s.toml:4:21: C: the lower limit stands first"},
      {start + "composition_wt_pct = {C = 0.2}\nrange_wt_pct = {C = [0.17]}\n",
       "s.toml:4:21: C: expected an array of 2 numbers, got 1"},
      {start + "composition_wt_pct = {C = 0.2}\nrange_wt_pct = {C = [0.17, \"x\"]}\n",
       "s.toml:4:28: C: expected a number, got a string"},
      {start + "composition_wt_pct = {C = 0.2}\n" + start + "composition_wt_pct = {C = 0.2}\n",
       "s.toml:5:6: id: \"S\" is taken already"},
      {"[[steel]]\ncomposition_wt_pct = {C = 0.2}\n",
       "s.toml:1:1: [[steel]]: id is missing: loads name the steel by it"},
  };
  for (const Mistake& mistake : mistakes) {
    CAPTURE(mistake.text);
    CHECK(faults_of(one, mistake.text) == mistake.message);
  }
}
