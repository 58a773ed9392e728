#include "server/command/feed.h"

#include <httplib.h>

#include <algorithm>
#include <atomic>
#include <chrono>
#include <condition_variable>
#include <csignal>
#include <cstdint>
#include <cstdio>
#include <ctime>
#include <deque>
#include <mutex>
#include <nlohmann/json.hpp>
#include <optional>
#include <thread>

#include "server/base/time_text.h"
#include "server/command/log_tail.h"

namespace hearthfront::server {
namespace {

using Steady = std::chrono::steady_clock;
using std::chrono::milliseconds;

constexpr std::size_t batch_rows = 1000;
constexpr std::size_t batch_bytes = std::size_t{512} * 1024;
constexpr milliseconds first_pause{250}, longest_pause{10'000};
constexpr milliseconds clock_refresh{2000};
constexpr int most_problems_told = 20;

void say(const std::string& text) {
  std::fprintf(stdout, "%s\n", text.c_str());
  std::fflush(stdout);
}

void complain(const std::string& text) {
  std::fprintf(stderr, "hearthfront feed: %s\n", text.c_str());
  std::fflush(stderr);
}

// SIGINT and SIGTERM end waiting at once and break off a request that hangs. They are blocked before this
// thread starts and stay so until it is joined, so that no other thread can be hit by them.
class StopSignal {
 public:
  explicit StopSignal(httplib::Client& client) : client_(client) {
    sigemptyset(&signals_);
    sigaddset(&signals_, SIGINT);
    sigaddset(&signals_, SIGTERM);
    pthread_sigmask(SIG_BLOCK, &signals_, &before_);
    thread_ = std::thread([this] { watch(); });
  }
  ~StopSignal() {
    done_ = true;
    thread_.join();
    pthread_sigmask(SIG_SETMASK, &before_, nullptr);
  }
  StopSignal(const StopSignal&) = delete;
  StopSignal& operator=(const StopSignal&) = delete;

  bool stopped() const { return stopped_; }

  // Waits so long, or until a signal.
  void pause(milliseconds duration) {
    std::unique_lock lock(mutex_);
    wake_.wait_for(lock, duration, [this] { return stopped_.load(); });
  }

 private:
  void watch() {
    const std::timespec tick{0, 50'000'000};
    while (!done_) {
      if (sigtimedwait(&signals_, nullptr, &tick) > 0) {
        const std::lock_guard lock(mutex_);
        stopped_ = true;
        wake_.notify_all();
      }
      // Again at each tick: a request may have begun just after the last time.
      if (stopped_ && !done_) client_.stop();
    }
  }

  httplib::Client& client_;
  sigset_t signals_{}, before_{};
  std::atomic<bool> stopped_ = false, done_ = false;
  std::mutex mutex_;
  std::condition_variable wake_;
  std::thread thread_;
};

struct Totals {
  std::uint64_t rows = 0, stored = 0, duplicate = 0, conflict = 0, refused = 0;
};

std::string counted(const Totals& totals) {
  return std::to_string(totals.stored) + " readings stored, " + std::to_string(totals.duplicate) +
         " there already, " + std::to_string(totals.conflict) + " in conflict, " +
         std::to_string(totals.refused) + " refused";
}

// The reason that a problem document gives, or the status where there is none.
std::string reason_of(const httplib::Response& answer) {
  const auto document = nlohmann::json::parse(answer.body, nullptr, false);
  std::string reason = "status " + std::to_string(answer.status);
  if (!document.is_object()) return reason;
  for (const char* member : {"title", "detail"}) {
    const auto found = document.find(member);
    if (found != document.end() && found->is_string())
      reason += (member[0] == 't' ? ": " : ". ") + found->get<std::string>();
  }
  return reason;
}

class Feed {
 public:
  Feed(const FeedOptions& options, const Furnace& furnace, const CsvMapping& mapping)
      : options_(options),
        tail_(options.file, furnace, mapping),
        client_(options.address, options.port),
        stop_(client_) {
    client_.set_connection_timeout(2);
    client_.set_read_timeout(20);
    client_.set_write_timeout(20);
    client_.set_keep_alive(true);
    client_.set_tcp_nodelay(true);
    log_path_ = "/api/v1/furnaces/" + furnace.id +
                "/log?mapping=" + httplib::detail::encode_query_param(mapping.name) + "&part=true";
  }

  int run() {
    bool fits = true;
    while (fits && !stop_.stopped()) {
      if (!tail_.fill(rows_, batch_rows, options_.follow)) {
        complain(tail_.problem());
        fits = false;
      } else if (tail_.started_over()) {
        say("The file became shorter: reading it again from its start.");
      } else if (rows_.empty()) {
        if (!options_.follow) break;
        catch_up_told();
        stop_.pause(milliseconds{500});
      } else {
        fits = send_what_is_due();
      }
    }
    if (totals_.rows == 0 && fits && !stop_.stopped())
      complain(options_.file + " has no rows below its header.");
    say((stop_.stopped() ? "Stopped. " : "") + std::string("Sent ") + std::to_string(totals_.rows) +
        " rows of " + options_.file + " to " + options_.furnace + ": " + counted(totals_) + ".");
    return fits ? 0 : 1;
  }

 private:
  bool send_what_is_due() {
    std::size_t due = rows_.size();
    if (!options_.at_once) {
      const std::optional<std::int64_t> now_us = daemon_time_us();
      if (!now_us) return true;  // stopped
      // In the order of the file, late rows included: that is how a logger delivers.
      due = 0;
      while (due < rows_.size() && rows_[due].time_us <= *now_us) ++due;
      if (due == 0) {
        catch_up_told();
        wait_for(rows_.front().time_us - *now_us);
        return true;
      }
    }
    return send(due);
  }

  void catch_up_told() {
    if (caught_up_) return;
    caught_up_ = true;
    say("Sent " + std::to_string(totals_.rows) + " rows whose time has come (" + counted(totals_) +
        "); following the daemon's clock from here.");
  }

  void wait_for(std::int64_t ahead_us) {
    const double real_ms = static_cast<double>(ahead_us) / 1000.0 / std::max(speed_, 1e-3);
    stop_.pause(milliseconds(static_cast<int>(std::clamp(real_ms + 1.0, 5.0, 500.0))));
  }

  // Asks now and then and runs on by itself in between. Empty when stopped.
  std::optional<std::int64_t> daemon_time_us() {
    if (!clock_read_ || Steady::now() - clock_read_at_ > clock_refresh) {
      const bool read = keep_trying([this] {
        const httplib::Result answer = client_.Get("/api/v1/status");
        const Steady::time_point at = Steady::now();
        if (!answer) return trouble(httplib::to_string(answer.error()));
        if (answer->status != 200) return trouble(reason_of(*answer));
        const auto status = nlohmann::json::parse(answer->body, nullptr, false);
        std::string reason;
        if (!status.is_object() || !status.contains("now") || !status["now"].is_string()) {
          return trouble("what answers there is no hearthfront daemon");
        }
        const auto now_us = parse_time(status["now"].get<std::string>(), reason);
        if (!now_us) return trouble("its clock cannot be read: " + reason);
        const auto speed = status.find("clock_speed");
        speed_ = speed != status.end() && speed->is_number() ? speed->get<double>() : 1.0;
        clock_us_ = *now_us;
        clock_read_at_ = at;
        clock_read_ = true;
        return true;
      });
      if (!read) return {};
    }
    const std::chrono::duration<double, std::micro> passed = Steady::now() - clock_read_at_;
    return clock_us_ + static_cast<std::int64_t>(passed.count() * speed_);
  }

  // Until `attempt` succeeds. False when stopped. A time-out leaves the outcome open; sending again is safe,
  // because the daemon knows a reading that it already has.
  template <typename Attempt>
  bool keep_trying(Attempt attempt) {
    milliseconds pause = first_pause;
    while (!stop_.stopped()) {
      if (attempt()) {
        if (in_trouble_) say("The daemon answers again.");
        in_trouble_ = false;
        return true;
      }
      stop_.pause(std::max(pause, asked_to_wait_));
      asked_to_wait_ = milliseconds{0};
      pause = std::min(2 * pause, longest_pause);
    }
    return false;
  }

  bool trouble(const std::string& reason) {
    if (!in_trouble_ && !stop_.stopped()) {
      complain("the daemon at " + options_.address + ":" + std::to_string(options_.port) +
               " does not take readings now (" + reason + "). Trying until it does; nothing is skipped.");
    }
    in_trouble_ = true;
    return false;
  }

  // Sends up to `due` rows from the front; what is sent leaves the queue. False where the daemon refuses for
  // good.
  bool send(std::size_t due) {
    std::string body = tail_.header();
    std::size_t count = 0;
    while (count < std::min(due, most_rows_) &&
           (count == 0 || body.size() + rows_[count].text.size() < batch_bytes)) {
      body += rows_[count++].text + "\n";
    }
    std::string refused_for_good;
    bool too_big = false;
    const bool sent = keep_trying([&] {
      const httplib::Result answer = client_.Post(log_path_, body, "text/csv");
      if (!answer) return trouble(httplib::to_string(answer.error()));
      if (answer->status == 200) return take_report(answer->body, count);
      too_big = answer->status == 413 && count > 1;
      const bool passing = answer->status >= 500 || answer->status == 429 || answer->status == 408;
      if (too_big) return true;
      if (!passing) {
        refused_for_good = reason_of(*answer);
        return true;
      }
      const std::string wait = answer->get_header_value("Retry-After");
      if (!wait.empty() && wait.size() < 4 && wait.find_first_not_of("0123456789") == std::string::npos) {
        asked_to_wait_ = std::min(milliseconds{1000 * std::stoi(wait)}, milliseconds{30'000});
      }
      return trouble(reason_of(*answer));
    });
    if (!sent) return true;
    if (too_big) {
      most_rows_ = count / 2;
      return true;
    }
    if (!refused_for_good.empty()) {
      complain("the daemon refuses line " + std::to_string(rows_.front().line) + " and after of " +
               options_.file + " (" + refused_for_good + ").");
      return false;
    }
    rows_.erase(rows_.begin(), rows_.begin() + static_cast<std::ptrdiff_t>(count));
    return true;
  }

  bool take_report(const std::string& body, std::size_t count) {
    const auto report = nlohmann::json::parse(body, nullptr, false);
    if (!report.is_object()) return trouble("its answer is not the expected JSON");
    const auto number = [&](const char* member) -> std::uint64_t {
      const auto found = report.find(member);
      return found != report.end() && found->is_number_unsigned() ? found->get<std::uint64_t>() : 0;
    };
    totals_.rows += count;
    totals_.stored += number("stored");
    totals_.duplicate += number("duplicate");
    totals_.conflict += number("conflict");
    totals_.refused += number("refused");
    const auto problems = report.find("problems");
    if (problems == report.end() || !problems->is_array()) return true;
    for (const auto& problem : *problems) {
      if (!problem.is_object() || problems_told_ > most_problems_told) continue;
      if (problems_told_++ == most_problems_told) {
        complain("more such lines are not shown; the daemon stores and counts each of them.");
        continue;
      }
      // The daemon counts the lines of what it was sent; people look into the file.
      const auto row =
          static_cast<std::size_t>(std::max(problem.value("line", 0) - tail_.header_count() - 1, 0));
      const int line = row < count ? rows_[row].line : 0;
      complain(options_.file + ", line " + std::to_string(line) + ": " +
               problem.value("reason", "no reason given"));
    }
    return true;
  }

  const FeedOptions& options_;
  LogTail tail_;
  httplib::Client client_;
  StopSignal stop_;
  std::string log_path_;
  std::deque<LogRow> rows_;
  std::size_t most_rows_ = batch_rows;
  Totals totals_;
  int problems_told_ = 0;
  bool caught_up_ = false, in_trouble_ = false, clock_read_ = false;
  std::int64_t clock_us_ = 0;
  double speed_ = 1;
  Steady::time_point clock_read_at_{};
  milliseconds asked_to_wait_{0};
};

}  // namespace

int run_feed(const FeedOptions& options) {
  if (options.address.rfind("127.", 0) != 0 && options.address != "::1" && options.address != "localhost") {
    complain("the address " + options.address + " is not on this machine; only loopback is allowed as yet.");
    return 2;
  }
  ConfigErrors errors;
  const Plant plant = read_plant(options.plant_path, options.steels_path, errors);
  for (const std::string& message : errors.messages) complain(message);
  if (!errors.ok()) return 2;
  const Furnace* furnace = plant.furnace(options.furnace);
  if (furnace == nullptr) {
    complain("the plant file " + options.plant_path + " has no furnace \"" + options.furnace + "\".");
    return 2;
  }
  const CsvMapping* mapping = furnace->csv_mapping(options.mapping);
  if (mapping == nullptr) {
    std::string known;
    for (const CsvMapping& each : furnace->csv_mappings) known += (known.empty() ? "" : ", ") + each.name;
    complain("furnace " + options.furnace + " has no csv mapping \"" + options.mapping +
             "\"; it has: " + (known.empty() ? "none" : known) + ".");
    return 2;
  }
  return Feed(options, *furnace, *mapping).run();
}

}  // namespace hearthfront::server
