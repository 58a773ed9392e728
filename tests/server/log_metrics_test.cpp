// What /metrics shows. Source of the text form: Prometheus text exposition format 0.0.4.
#include "server/base/metrics.h"

#include <doctest/doctest.h>

#include <set>
#include <sstream>
#include <thread>
#include <vector>

using namespace hearthfront::server;

namespace {

// The value of a series, or "absent".
std::string value_of(const Metrics& metrics, const std::string& series) {
  std::istringstream lines(metrics.text());
  for (std::string line; std::getline(lines, line);) {
    if (line.compare(0, series.size() + 1, series + " ") == 0) return line.substr(series.size() + 1);
  }
  return "absent";
}

}  // namespace

TEST_CASE("totals add up, levels are set, all start at zero") {
  Metrics metrics;
  CHECK(value_of(metrics, "hearthfront_readings_stored_total") == "0");
  metrics.add(Total::readings_stored);
  metrics.add(Total::readings_stored, 99);
  metrics.set(Level::open_loads, 3);
  metrics.set(Level::open_loads, 2);
  CHECK(value_of(metrics, "hearthfront_readings_stored_total") == "100");
  CHECK(value_of(metrics, "hearthfront_open_loads") == "2");
}

TEST_CASE("a total counted elsewhere is only ever raised") {
  Metrics metrics;
  metrics.raise_to(Total::commits, 7);
  metrics.raise_to(Total::commits, 7);
  metrics.raise_to(Total::commits, 3);
  CHECK(value_of(metrics, "hearthfront_commits_total") == "7");
}

TEST_CASE("refusals are counted by reason and ages by furnace; label values are escaped") {
  Metrics metrics;
  metrics.add_refused("future time");
  metrics.add_refused("future time", 2);
  metrics.set_data_age("pit-2", 20.5);
  metrics.set_data_age("a\"b", 1);
  CHECK(value_of(metrics, "hearthfront_readings_refused_total{reason=\"future time\"}") == "3");
  CHECK(value_of(metrics, "hearthfront_data_age_seconds{furnace=\"pit-2\"}") == "20.5");
  CHECK(value_of(metrics, "hearthfront_data_age_seconds{furnace=\"a\\\"b\"}") == "1");
}

TEST_CASE("every series has help and type, and no name stands twice") {
  Metrics metrics;
  std::istringstream lines(metrics.text());
  std::set<std::string> helped, typed, named;
  for (std::string line; std::getline(lines, line);) {
    std::istringstream words(line);
    std::string first, second, third;
    words >> first >> second >> third;
    if (second == "HELP") {
      CHECK(helped.insert(third).second);
    } else if (second == "TYPE") {
      CHECK(typed.insert(third).second);
    } else {
      CHECK(named.insert(first).second);
    }
  }
  CHECK(named.size() == 18);  // nine totals, nine levels
  for (const std::string& name : named) {
    CAPTURE(name);
    CHECK(helped.count(name) == 1);
    CHECK(typed.count(name) == 1);
  }
}

TEST_CASE("threads may count at the same time") {
  Metrics metrics;
  std::vector<std::thread> threads;
  for (int i = 0; i < 4; ++i) {
    threads.emplace_back([&] {
      for (int n = 1; n <= 1000; ++n) {
        metrics.add(Total::http_requests);
        metrics.add_refused("bad time");
        metrics.raise_to(Total::commits, n);
      }
    });
  }
  for (std::thread& each : threads) each.join();
  CHECK(value_of(metrics, "hearthfront_http_requests_total") == "4000");
  CHECK(value_of(metrics, "hearthfront_readings_refused_total{reason=\"bad time\"}") == "4000");
  CHECK(value_of(metrics, "hearthfront_commits_total") == "1000");
}
