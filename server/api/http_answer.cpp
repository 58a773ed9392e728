#include "server/api/http_answer.h"

#include <httplib.h>

#include <algorithm>
#include <array>
#include <cstring>
#include <ctime>
#include <memory>
#include <stdexcept>
#include <utility>

#include "server/api/http_text.h"

namespace hearthfront::server {
namespace {

constexpr std::size_t min_gzip_bytes = 1024;

// What one call of the library works on. Callbacks of the library are shared by all threads, so each
// thread finds its own call here.
struct Call {
  AnswerFrame frame;
  Reply reply;
};
thread_local Call* current_call = nullptr;

class MemoryStream final : public httplib::Stream {
 public:
  explicit MemoryStream(std::string input) : input_(std::move(input)) {}

  bool is_readable() const override { return true; }
  bool is_writable() const override { return true; }
  ssize_t read(char* target, size_t size) override {
    const auto count = std::min(size, input_.size() - read_);
    std::memcpy(target, input_.data() + read_, count);
    read_ += count;
    return static_cast<ssize_t>(count);
  }
  ssize_t write(const char* bytes, size_t size) override {
    output_.append(bytes, size);
    return static_cast<ssize_t>(size);
  }
  void get_remote_ip_and_port(std::string& address, int& port) const override {
    address.clear();
    port = 0;
  }
  void get_local_ip_and_port(std::string& address, int& port) const override {
    get_remote_ip_and_port(address, port);
  }
  socket_t socket() const override { return -1; }

  std::string take_output() { return std::move(output_); }

 private:
  std::string input_;
  std::size_t read_ = 0;
  std::string output_;
};

bool starts_with(std::string_view text, std::string_view start) {
  return text.substr(0, start.size()) == start;
}

// Files of the dashboard only: JSON stays plain, since text under a visitor's influence compressed together
// with a secret tells the secret by its length.
bool is_asset(std::string_view type) {
  constexpr std::array<std::string_view, 5> assets = {"text/html", "text/css", "text/javascript",
                                                      "application/javascript", "image/svg+xml"};
  return std::any_of(assets.begin(), assets.end(), [&](auto asset) { return starts_with(type, asset); });
}

bool is_json(std::string_view type) {
  return starts_with(type, "application/json") || starts_with(type, "application/problem+json");
}

bool has_header(const Response& response, std::string_view lower_name) {
  return std::any_of(response.headers.begin(), response.headers.end(),
                     [&](const auto& header) { return lower_ascii(header.first) == lower_name; });
}

const std::string& date_now() {
  thread_local std::time_t shown_s = 0;
  thread_local std::string text;
  if (const auto now_s = std::time(nullptr); now_s != shown_s || text.empty()) {
    shown_s = now_s;
    text = http_date(now_s);
  }
  return text;
}

void add_front_headers(httplib::Headers& headers) {
  headers.emplace("Date", date_now());
  headers.emplace("Content-Security-Policy",
                  "default-src 'self'; img-src 'self' data:; style-src 'self'; frame-ancestors 'none'; "
                  "base-uri 'none'; form-action 'self'");
  headers.emplace("X-Content-Type-Options", "nosniff");
  headers.emplace("Referrer-Policy", "no-referrer");
}

void check_headers(const Response& response) {
  bool clean = is_field_value(response.content_type);
  for (const auto& [name, value] : response.headers) clean = clean && is_token(name) && is_field_value(value);
  if (!clean) throw std::runtime_error("a handler set a header that is not one line of UTF-8 text");
}

void fill(httplib::Response& out, Reply& reply) {
  constexpr std::array<std::string_view, 5> own = {"date", "connection", "content-length",
                                                   "transfer-encoding", "keep-alive"};
  Response& response = reply.response;
  out.status = response.status;
  for (auto& [name, value] : response.headers) {
    if (std::find(own.begin(), own.end(), lower_ascii(name)) == own.end()) out.headers.emplace(name, value);
  }
  add_front_headers(out.headers);
  if (!has_header(response, "cache-control") && (reply.endless || is_json(response.content_type))) {
    out.headers.emplace("Cache-Control", "no-store");
  }
  if (response.status == 503 && !has_header(response, "retry-after")) out.headers.emplace("Retry-After", "2");
  if (reply.endless) {
    // The library calls this once, after the headers; what follows them is the event hub's.
    out.set_content_provider(response.content_type, [](size_t, httplib::DataSink&) { return false; });
    return;
  }
  if (response.status == 204 || response.status == 304) response.body.clear();
  if (is_asset(response.content_type)) out.headers.emplace("Vary", "Accept-Encoding");
  if (!response.body.empty() && !response.content_type.empty())
    out.headers.emplace("Content-Type", response.content_type);
  out.body = std::move(response.body);
}

// The last word on the headers: what the library adds on its own is not true here.
void finish_headers(httplib::Response& out) {
  for (const char* name : {"Keep-Alive", "Connection", "Accept-Ranges"}) out.headers.erase(name);
  // RFC 9110 8.6: no length where there is no content to measure.
  if (out.status == 204 || out.status == 304) out.headers.erase("Content-Length");
  const Call& call = *current_call;
  if (!call.frame.keep_alive || call.reply.endless) out.headers.emplace("Connection", "close");
}

}  // namespace

class AnswerWriter::Library final : public httplib::Server {
 public:
  Library() {
    set_pre_routing_handler([](const httplib::Request&, httplib::Response& out) {
      fill(out, current_call->reply);
      return HandlerResponse::Handled;
    });
    set_post_routing_handler([](const httplib::Request&, httplib::Response& out) { finish_headers(out); });
  }

  std::string run(const AnswerFrame& frame, Reply reply) {
    Call call{frame, std::move(reply)};
    const Response& response = call.reply.response;
    check_headers(response);
    std::string request = frame.head_only ? "HEAD / HTTP/1.1\r\n" : "GET / HTTP/1.1\r\n";
    if (frame.accepts_gzip && response.body.size() >= min_gzip_bytes && is_asset(response.content_type) &&
        !has_header(response, "content-encoding")) {
      request += "Accept-Encoding: gzip\r\n";
    }
    MemoryStream stream(request + "\r\n");
    bool closed = false;
    current_call = &call;
    process_request(stream, false, closed, nullptr);
    current_call = nullptr;
    return stream.take_output();
  }
};

AnswerWriter::AnswerWriter() : library_(std::make_unique<Library>()) {
  // The library fills tables of its own at the first answer; doing that before there are threads keeps race
  // detectors, which cannot see into it, quiet.
  answer({}, {});
}
AnswerWriter::~AnswerWriter() = default;

std::string AnswerWriter::answer(const AnswerFrame& frame, Reply reply) const {
  return library_->run(frame, std::move(reply));
}

bool accepts_gzip(std::string_view accept_encoding) {
  bool accepted = false;
  for_each_part(accept_encoding, ',', [&](std::string_view part) {
    const auto semicolon = part.find(';');
    if (lower_ascii(trim_blanks(part.substr(0, semicolon))) != "gzip") return;
    const auto weight = semicolon == std::string_view::npos ? std::string_view("q=1")
                                                            : trim_blanks(part.substr(semicolon + 1));
    accepted = weight.find_first_of("123456789") != std::string_view::npos;
  });
  return accepted;
}

}  // namespace hearthfront::server
