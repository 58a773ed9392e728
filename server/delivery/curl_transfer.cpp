#include "server/delivery/curl_transfer.h"

#include <sys/socket.h>
#include <unistd.h>

#include <algorithm>
#include <stdexcept>

#include "server/base/utf8.h"

namespace hearthfront::server {
namespace {

constexpr std::size_t most_answer_bytes = 64 << 10;  // more than anybody has to say about an alert
constexpr std::size_t kept_answer_bytes = 300, most_lines = 200;
constexpr int step_ms = 100;  // how late a stop request may be seen

std::string one_line(std::string text) {
  std::replace_if(
      text.begin(), text.end(), [](char c) { return (c >= 0 && c < 0x20) || c == 0x7f; }, ' ');
  text.erase(text.find_last_not_of(' ') + 1);
  return clean_text(text, kept_answer_bytes);
}

}  // namespace

void CurlList::add(const std::string& line) {
  curl_slist* longer = curl_slist_append(list_, line.c_str());
  if (longer == nullptr) throw std::bad_alloc();
  list_ = longer;
}

CurlTransfer::CurlTransfer() {
  static const CURLcode ready = curl_global_init(CURL_GLOBAL_DEFAULT);
  check(ready);
  easy_ = curl_easy_init();
  multi_ = curl_multi_init();
  if (easy_ == nullptr || multi_ == nullptr) throw std::runtime_error("libcurl gives no handle");
}

CurlTransfer::~CurlTransfer() {
  curl_easy_cleanup(easy_);
  curl_multi_cleanup(multi_);
}

void CurlTransfer::check(CURLcode code) {
  if (code != CURLE_OK) throw std::runtime_error(std::string("libcurl: ") + curl_easy_strerror(code));
}

void CurlTransfer::begin(const std::string& url, const std::string& protocol, int timeout_s,
                         const std::string& ca_file) {
  curl_easy_reset(easy_);
  upload_.clear();
  set(CURLOPT_URL, url.c_str());
  set(CURLOPT_PROTOCOLS_STR, protocol.c_str());
  set(CURLOPT_FOLLOWLOCATION, 0L);
  set(CURLOPT_PROXY, "");
  set(CURLOPT_NETRC, static_cast<long>(CURL_NETRC_IGNORED));
  set(CURLOPT_NOSIGNAL, 1L);
  set(CURLOPT_TIMEOUT_MS, 1000L * timeout_s);
  set(CURLOPT_CONNECTTIMEOUT_MS, 1000L * timeout_s);
  // A name that takes for ever to resolve must not hold up the end of the daemon.
  set(CURLOPT_QUICK_EXIT, 1L);
  set(CURLOPT_SSL_VERIFYPEER, 1L);
  set(CURLOPT_SSL_VERIFYHOST, 2L);
  set(CURLOPT_SSLVERSION, static_cast<long>(CURL_SSLVERSION_TLSv1_2));
  if (!ca_file.empty()) set(CURLOPT_CAINFO, ca_file.c_str());
  set(CURLOPT_ERRORBUFFER, words_);
  set(CURLOPT_WRITEFUNCTION, &CurlTransfer::on_answer);
  set(CURLOPT_WRITEDATA, static_cast<void*>(this));
  set(CURLOPT_HEADERFUNCTION, &CurlTransfer::on_line);
  set(CURLOPT_HEADERDATA, static_cast<void*>(this));
  set(CURLOPT_OPENSOCKETFUNCTION, &CurlTransfer::on_open);
  set(CURLOPT_OPENSOCKETDATA, static_cast<void*>(this));
  set(CURLOPT_CLOSESOCKETFUNCTION, &CurlTransfer::on_close);
  set(CURLOPT_CLOSESOCKETDATA, static_cast<void*>(this));
  set(CURLOPT_NOPROGRESS, 0L);
  set(CURLOPT_XFERINFOFUNCTION, &CurlTransfer::on_progress);
  set(CURLOPT_XFERINFODATA, static_cast<void*>(this));
}

// Sockets are kept account of, so that a stop request can cut them.
curl_socket_t CurlTransfer::on_open(void* self, curlsocktype, curl_sockaddr* address) {
  const int made = socket(address->family, address->socktype | SOCK_CLOEXEC, address->protocol);
  if (made < 0) return CURL_SOCKET_BAD;
  auto& transfer = *static_cast<CurlTransfer*>(self);
  const std::scoped_lock lock(transfer.sockets_mutex_);
  transfer.sockets_.push_back(made);
  return made;
}

int CurlTransfer::on_close(void* self, curl_socket_t socket) {
  auto& transfer = *static_cast<CurlTransfer*>(self);
  const std::scoped_lock lock(transfer.sockets_mutex_);
  std::erase(transfer.sockets_, socket);
  return close(socket);
}

void CurlTransfer::cut() {
  const std::scoped_lock lock(sockets_mutex_);
  for (const curl_socket_t each : sockets_) shutdown(each, SHUT_RDWR);
}

int CurlTransfer::on_progress(void* self, curl_off_t, curl_off_t, curl_off_t, curl_off_t) {
  return static_cast<CurlTransfer*>(self)->stop_.stop_requested() ? 1 : 0;
}

void CurlTransfer::upload(std::string text) {
  upload_ = std::move(text);
  set(CURLOPT_UPLOAD, 1L);
  set(CURLOPT_READFUNCTION, &CurlTransfer::on_upload);
  set(CURLOPT_READDATA, static_cast<void*>(this));
  set(CURLOPT_INFILESIZE_LARGE, static_cast<curl_off_t>(upload_.size()));
}

CurlTransfer::Ended CurlTransfer::run(const std::stop_token& stop) {
  words_[0] = '\0';
  uploaded_ = answer_bytes_ = 0;
  answer_.clear();
  lines_.clear();
  Ended ended;
  // The library waits inside itself for a mail server's last answer, and for its leave: there only a cut
  // socket and the progress function reach it.
  stop_ = stop;
  const std::stop_callback cut_at_once(stop, [this] { cut(); });
  if (curl_multi_add_handle(multi_, easy_) != CURLM_OK) throw std::runtime_error("libcurl takes no transfer");
  int running = 1;
  while (running != 0 && !ended.stopped) {
    CURLMcode code = curl_multi_perform(multi_, &running);
    if (code == CURLM_OK && running != 0) code = curl_multi_poll(multi_, nullptr, 0, step_ms, nullptr);
    if (code != CURLM_OK) {
      ended.code = CURLE_FAILED_INIT;
      ended.what = curl_multi_strerror(code);
      break;
    }
    ended.stopped = stop.stop_requested() && running != 0;
  }
  // Also a socket that was opened since.
  if (ended.stopped) cut();
  int left = 0;
  while (const CURLMsg* message = curl_multi_info_read(multi_, &left))
    if (message->msg == CURLMSG_DONE) ended.code = message->data.result;
  // What the cut did to it is no answer of the other side.
  if (stop.stop_requested() && ended.code != CURLE_OK) ended.stopped = true;
  curl_easy_getinfo(easy_, CURLINFO_RESPONSE_CODE, &ended.status);
  curl_off_t retry_after = 0;
  curl_easy_getinfo(easy_, CURLINFO_RETRY_AFTER, &retry_after);
  ended.retry_after_s = static_cast<int>(std::clamp<curl_off_t>(retry_after, 0, 1 << 20));
  curl_multi_remove_handle(multi_, easy_);
  if (ended.what.empty()) ended.what = one_line(words_[0] != '\0' ? words_ : curl_easy_strerror(ended.code));
  ended.answer = one_line(answer_);
  ended.lines = std::move(lines_);
  return ended;
}

std::size_t CurlTransfer::on_answer(char* data, std::size_t size, std::size_t count, void* self) {
  auto& transfer = *static_cast<CurlTransfer*>(self);
  const std::size_t bytes = size * count;
  transfer.answer_bytes_ += bytes;
  const std::size_t room = kept_answer_bytes - std::min(kept_answer_bytes, transfer.answer_.size());
  transfer.answer_.append(data, std::min(bytes, room));
  // Ends the transfer; its status is known by then.
  return transfer.answer_bytes_ > most_answer_bytes ? 0 : bytes;
}

std::size_t CurlTransfer::on_line(char* data, std::size_t size, std::size_t count, void* self) {
  auto& transfer = *static_cast<CurlTransfer*>(self);
  if (transfer.lines_.size() < most_lines)
    transfer.lines_.push_back(one_line(std::string(data, std::min(size * count, kept_answer_bytes))));
  return size * count;
}

std::size_t CurlTransfer::on_upload(char* into, std::size_t size, std::size_t count, void* self) {
  auto& transfer = *static_cast<CurlTransfer*>(self);
  const std::size_t bytes = std::min(size * count, transfer.upload_.size() - transfer.uploaded_);
  std::copy_n(transfer.upload_.data() + transfer.uploaded_, bytes, into);
  transfer.uploaded_ += bytes;
  return bytes;
}

}  // namespace hearthfront::server
