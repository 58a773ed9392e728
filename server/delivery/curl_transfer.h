// One libcurl transfer at a time that can be stopped at any moment. Internal to the senders (it brings
// libcurl's header). One thread at a time.
#pragma once

#include <curl/curl.h>

#include <cstddef>
#include <memory>
#include <mutex>
#include <stop_token>
#include <string>
#include <string_view>
#include <vector>

namespace hearthfront::server {

// A curl_slist that frees itself.
class CurlList {
 public:
  CurlList() = default;
  ~CurlList() { curl_slist_free_all(list_); }
  CurlList(const CurlList&) = delete;
  CurlList& operator=(const CurlList&) = delete;
  void add(const std::string& line);
  curl_slist* get() const { return list_; }

 private:
  curl_slist* list_ = nullptr;
};

class CurlTransfer {
 public:
  CurlTransfer();
  ~CurlTransfer();
  CurlTransfer(const CurlTransfer&) = delete;
  CurlTransfer& operator=(const CurlTransfer&) = delete;

  // Forgets all options and sets those that every transfer here has: the timeout for the whole of it, checked
  // certificates of TLS 1.2 or newer, no redirects, no proxy from the environment, bounded answers. Keeps
  // open connections.
  void begin(const std::string& url, const std::string& protocol, int timeout_s, const std::string& ca_file);
  template <typename Value>
  void set(CURLoption option, Value value) {
    check(curl_easy_setopt(easy_, option, value));
  }
  void upload(std::string text);  // what an upload (mail) reads

  struct Ended {
    CURLcode code = CURLE_OK;
    bool stopped = false;
    long status = 0;                 // of HTTP or of the last SMTP reply, 0: none came
    std::string what;                // libcurl's words for the failure
    std::string answer;              // the first bytes of the answer's body, as text on one line
    std::vector<std::string> lines;  // headers, or SMTP replies; at most 200
    int retry_after_s = 0;
  };
  Ended run(const std::stop_token& stop);

 private:
  static void check(CURLcode code);
  static std::size_t on_answer(char* data, std::size_t size, std::size_t count, void* self);
  static std::size_t on_line(char* data, std::size_t size, std::size_t count, void* self);
  static std::size_t on_upload(char* into, std::size_t size, std::size_t count, void* self);
  static curl_socket_t on_open(void* self, curlsocktype purpose, curl_sockaddr* address);
  static int on_close(void* self, curl_socket_t socket);
  static int on_progress(void* self, curl_off_t, curl_off_t, curl_off_t, curl_off_t);
  void cut();  // every open socket; any thread

  CURL* easy_ = nullptr;
  CURLM* multi_ = nullptr;
  char words_[CURL_ERROR_SIZE] = "";
  std::string upload_, answer_;
  std::mutex sockets_mutex_;            // guards sockets_
  std::vector<curl_socket_t> sockets_;  // open ones, at most a few
  std::stop_token stop_;                // of the transfer under way
  std::size_t uploaded_ = 0, answer_bytes_ = 0;
  std::vector<std::string> lines_;
};

}  // namespace hearthfront::server
