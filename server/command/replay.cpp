#include <algorithm>
#include <cmath>
#include <cstdio>
#include <fstream>
#include <map>
#include <sstream>

#include "server/api/http_server.h"
#include "server/base/time_text.h"
#include "server/command/commands.h"
#include "server/ingest/csv.h"
#include "server/live/definition_json.h"
#include "server/live/derive.h"
#include "server/live/result_json.h"

namespace hearthfront::server {
namespace {

std::string read_file(const std::string& path) {
  std::ifstream in(path, std::ios::binary);
  if (!in) throw std::runtime_error(path + ": cannot be opened; is the path right?");
  std::ostringstream text;
  text << in.rdbuf();
  return std::move(text).str();
}

// Readings of a file by channel, under the same rules as in the daemon's store: one value for a time is
// accepted, the same value again is the same reading, two different ones are both left out.
class FileReadings {
 public:
  FileReadings(const DecodedCsv& decoded, const Furnace& furnace) {
    std::map<std::string, std::vector<Sample>> all;
    for (const RawReading& item : decoded.items) {
      const Channel* channel = furnace.channel(item.channel);
      const bool usable = item.refusal == Refusal::none && channel && std::isfinite(item.value) &&
                          item.value >= channel->low && item.value <= channel->high;
      if (usable) all[item.channel].push_back({item.time_us, item.value == 0 ? 0.0 : item.value});
      refused_ += usable ? 0 : 1;
    }
    for (auto& [channel, samples] : all) {
      std::sort(samples.begin(), samples.end(), [](const Sample& a, const Sample& b) {
        return std::pair(a.time_us, a.value) < std::pair(b.time_us, b.value);
      });
      const auto same = [](const Sample& a, const Sample& b) {
        return a.time_us == b.time_us && a.value == b.value;
      };
      samples.erase(std::unique(samples.begin(), samples.end(), same), samples.end());
      std::vector<Sample>& accepted = accepted_[channel];
      for (std::size_t i = 0; i < samples.size(); ++i) {
        const bool clash = (i > 0 && samples[i - 1].time_us == samples[i].time_us) ||
                           (i + 1 < samples.size() && samples[i + 1].time_us == samples[i].time_us);
        if (!clash) accepted.push_back(samples[i]);
        conflicts_ += clash ? 1 : 0;
      }
    }
  }

  std::vector<Sample> in(const std::string& channel, std::int64_t from_us, std::int64_t to_us) const {
    std::vector<Sample> samples;
    const auto it = accepted_.find(channel);
    if (it == accepted_.end()) return samples;
    for (const Sample& sample : it->second)
      if (sample.time_us >= from_us && sample.time_us <= to_us) samples.push_back(sample);
    return samples;
  }
  std::int64_t newest_us(std::int64_t otherwise) const {
    std::int64_t newest = otherwise;
    for (const auto& [channel, samples] : accepted_)
      if (!samples.empty()) newest = std::max(newest, samples.back().time_us);
    return newest;
  }
  std::size_t refused() const { return refused_; }
  std::size_t conflicts() const { return conflicts_; }

 private:
  std::map<std::string, std::vector<Sample>> accepted_;
  std::size_t refused_ = 0, conflicts_ = 0;
};

const CsvMapping& mapping_of(const Furnace& furnace, const ReplayOptions& options) {
  if (options.mapping.empty() && furnace.csv_mappings.size() == 1) return furnace.csv_mappings.front();
  if (const CsvMapping* mapping = furnace.csv_mapping(options.mapping)) return *mapping;
  throw Problem{422, "unknown-mapping", options.plant_path,
                "furnace " + furnace.id + " has no CSV mapping \"" + options.mapping +
                    "\"; name one of its [[furnace.csv]] with --mapping.",
                "mapping"};
}

// Which furnace a --log is of, and its file.
std::pair<const Furnace*, std::string> log_of(const std::string& word, const LoadDefinition& load) {
  const auto equals = word.find('=');
  if (equals != std::string::npos)
    if (const Furnace* furnace = load.furnace(word.substr(0, equals)))
      return {furnace, word.substr(equals + 1)};
  return {&load.first_furnace(), word};
}

FileReadings read_log(const Furnace& furnace, const std::string& path, const ReplayOptions& options) {
  const DecodedCsv decoded = decode_csv(read_file(path), furnace, mapping_of(furnace, options));
  if (decoded.problem) throw Problem(*decoded.problem);
  if (decoded.misfit) throw Problem(*decoded.misfit);
  FileReadings readings(decoded, furnace);
  if (readings.refused() + readings.conflicts() > 0)
    std::fprintf(stderr,
                 "%s: %zu readings refused, %zu set aside because another value stands at their time.\n",
                 path.c_str(), readings.refused(), readings.conflicts());
  return readings;
}

int replay(const ReplayOptions& options) {
  ConfigErrors errors;
  const Plant plant = read_plant(options.plant_path, options.steels_path, errors);
  for (const std::string& message : errors.messages) std::fprintf(stderr, "%s\n", message.c_str());
  if (!errors.ok()) return exit_bad_input;

  const auto definition =
      std::make_shared<const LoadDefinition>(read_load_body(read_file(options.load_path), plant));
  std::map<std::string, FileReadings> readings;  // by furnace
  std::int64_t newest_us = definition->started_us;
  for (const std::string& word : options.logs) {
    const auto [furnace, path] = log_of(word, *definition);
    const auto [place, added] = readings.emplace(furnace->id, read_log(*furnace, path, options));
    if (!added)
      throw Problem{422, "two-logs", path, "furnace " + furnace->id + " has a log already; join the files.",
                    "log"};
    newest_us = std::max(newest_us, place->second.newest_us(definition->started_us));
  }
  ReadingSource source;
  source.readings = [&](const LoadChannels::Used& used, std::int64_t from, std::int64_t to) {
    const auto found = readings.find(used.furnace);
    return found == readings.end() ? std::vector<Sample>{} : found->second.in(used.name, from, to);
  };
  const std::int64_t until = definition->ended_us.value_or(newest_us);
  const RunResult result = read_result(*derive(definition, source, until), definition);
  std::printf("%s\n", (options.json ? result_json(result) : result_table(result)).c_str());
  return exit_done;
}

}  // namespace

int run_replay(const ReplayOptions& options) {
  try {
    return replay(options);
  } catch (const Problem& problem) {
    std::fprintf(stderr, "%s: %s\n", problem.title.c_str(), problem.detail.c_str());
    return exit_bad_input;
  } catch (const std::exception& error) {
    std::fprintf(stderr, "%s\n", error.what());
    return exit_failed;
  }
}

}  // namespace hearthfront::server
