// A client for the tests that speaks bytes, so that it can say what no well-behaved client would. Every
// wait is bounded by ten seconds. One thread per client.
#pragma once

#include <arpa/inet.h>
#include <netinet/in.h>
#include <sys/socket.h>
#include <sys/time.h>
#include <unistd.h>

#include <array>
#include <cerrno>
#include <cstdint>
#include <cstdlib>
#include <stdexcept>
#include <string>
#include <utility>

namespace http_test {

struct Answer {
  int status = 0;  // 0: the connection ended before a whole answer came
  std::string head;
  std::string body;

  bool has(const std::string& header_line) const {
    return head.find("\r\n" + header_line) != std::string::npos;
  }
};

class Client {
 public:
  explicit Client(int port) : socket_(::socket(AF_INET, SOCK_STREAM | SOCK_CLOEXEC, 0)) {
    const timeval patience{10, 0};
    setsockopt(socket_, SOL_SOCKET, SO_RCVTIMEO, &patience, sizeof patience);
    setsockopt(socket_, SOL_SOCKET, SO_SNDTIMEO, &patience, sizeof patience);
    sockaddr_in address{};
    address.sin_family = AF_INET;
    address.sin_port = htons(static_cast<std::uint16_t>(port));
    address.sin_addr.s_addr = htonl(INADDR_LOOPBACK);
    connected_ = ::connect(socket_, reinterpret_cast<const sockaddr*>(&address), sizeof address) == 0;
  }
  Client(Client&& other) noexcept
      : socket_(std::exchange(other.socket_, -1)),
        connected_(other.connected_),
        input_(std::move(other.input_)) {}
  Client& operator=(Client&&) = delete;
  ~Client() {
    if (socket_ >= 0) ::close(socket_);
  }

  bool connected() const { return connected_; }
  int socket() const { return socket_; }
  void end_sending() { ::shutdown(socket_, SHUT_WR); }

  // False where the server closed meanwhile.
  bool send(const std::string& bytes) {
    std::size_t sent = 0;
    while (sent < bytes.size()) {
      const auto count = ::send(socket_, bytes.data() + sent, bytes.size() - sent, MSG_NOSIGNAL);
      if (count <= 0) return false;
      sent += static_cast<std::size_t>(count);
    }
    return true;
  }

  // False at the end of the connection, or after ten silent seconds.
  bool receive() {
    std::array<char, 65536> buffer{};
    const auto count = ::recv(socket_, buffer.data(), buffer.size(), 0);
    if (count > 0) input_.append(buffer.data(), static_cast<std::size_t>(count));
    return count > 0;
  }

  // Takes the input up to and including `mark`; empty where it never came.
  std::string read_through(const std::string& mark) {
    std::size_t from = 0;
    while (true) {
      const auto found = input_.find(mark, from);
      if (found != std::string::npos) return take(found + mark.size());
      from = input_.size() < mark.size() ? 0 : input_.size() - mark.size();
      if (!receive()) return {};
    }
  }

  Answer read_answer(bool without_body = false) {
    Answer answer;
    answer.head = read_through("\r\n\r\n");
    if (answer.head.size() < 12) return answer;
    const auto place = answer.head.find("\r\nContent-Length: ");
    const std::size_t length = place == std::string::npos || without_body
                                   ? 0
                                   : std::strtoul(answer.head.c_str() + place + 18, nullptr, 10);
    while (input_.size() < length) {
      if (!receive()) return answer;
    }
    answer.body = take(length);
    answer.status = std::atoi(answer.head.c_str() + 9);
    return answer;
  }

  Answer ask(const std::string& bytes) {
    send(bytes);
    return read_answer();
  }

  // True where the server ends the connection with nothing further said.
  bool ended() {
    while (receive()) {
    }
    return input_.empty() && (errno != EAGAIN && errno != EWOULDBLOCK);
  }

 private:
  std::string take(std::size_t count) {
    std::string result = input_.substr(0, count);
    input_.erase(0, count);
    return result;
  }

  int socket_;
  bool connected_ = false;
  std::string input_;
};

inline std::string get(const std::string& target, const std::string& more_headers = {}) {
  return "GET " + target + " HTTP/1.1\r\nHost: localhost\r\n" + more_headers + "\r\n";
}

inline std::string post(const std::string& target, const std::string& body,
                        const std::string& more_headers = {}) {
  return "POST " + target + " HTTP/1.1\r\nHost: localhost\r\nContent-Length: " + std::to_string(body.size()) +
         "\r\n" + more_headers + "\r\n" + body;
}

}  // namespace http_test
