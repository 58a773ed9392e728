// The command line. Each subcommand lives in server/command; this file only reads the words.
#include <CLI/CLI.hpp>

#include "server/base/version.h"
#include "server/command/commands.h"
#include "server/command/feed.h"

using namespace hearthfront::server;

int main(int argc, char** argv) {
  CLI::App app(
      "hearthfront watches case-hardening furnaces (read only) and predicts the case depth of the parts "
      "inside.\n"
      "Advice only: it commands no furnace, and a case is released by measurement, not by prediction.");
  app.set_version_flag("--version", version);
  app.require_subcommand(1);

  std::string settings;
  const auto settings_option = [&](CLI::App* command) {
    command
        ->add_option("--settings", settings,
                     "Settings file (TOML); config/hearthfront.toml shows every option")
        ->required()
        ->check(CLI::ExistingFile);
  };

  CLI::App* serve =
      app.add_subcommand("serve", "Run the daemon until it is told to stop (Ctrl-C or SIGTERM)");
  settings_option(serve);

  CLI::App* check = app.add_subcommand("check", "Prove settings, plant and steel files; open nothing");
  settings_option(check);

  ReplayOptions replay_options;
  CLI::App* replay = app.add_subcommand("replay", "Run a load on a log file, without daemon or database");
  replay->add_option("--plant", replay_options.plant_path, "Plant file (TOML)")
      ->required()
      ->check(CLI::ExistingFile);
  replay->add_option("--steels", replay_options.steels_path, "Steel library (TOML)")
      ->required()
      ->check(CLI::ExistingFile);
  replay->add_option("--load", replay_options.load_path, "Load file (JSON), as posted to /api/v1/loads")
      ->required()
      ->check(CLI::ExistingFile);
  replay
      ->add_option("--log", replay_options.logs,
                   "The furnace's log file; FURNACE=FILE for another furnace that the load went through")
      ->required();
  replay->add_option("--mapping", replay_options.mapping,
                     "Name of the [[furnace.csv]] that describes the log file");
  replay->add_flag("--json", replay_options.json, "Print the result document instead of a table");

  FeedOptions feed_options;
  CLI::App* feed =
      app.add_subcommand("feed", "Send a log file to a running daemon as its clock reaches each row");
  settings_option(feed);
  feed->add_option("--furnace", feed_options.furnace, "Id of the furnace the log belongs to")->required();
  feed->add_option("--mapping", feed_options.mapping,
                   "Name of the [[furnace.csv]] that describes the log file")
      ->required();
  feed->add_option("--file", feed_options.file, "The log file (CSV)")->required()->check(CLI::ExistingFile);
  feed->add_flag("--at-once", feed_options.at_once, "Send every row now instead of when its time comes");
  feed->add_flag("--follow", feed_options.follow, "At the end of the file wait for more rows");

  try {
    app.parse(argc, argv);
  } catch (const CLI::ParseError& error) {
    return app.exit(error) == 0 ? exit_done : exit_bad_input;
  }
  if (*serve) return run_serve(settings);
  if (*check) return run_check(settings);
  if (*replay) return run_replay(replay_options);
  return run_feed_with(settings, feed_options);
}
