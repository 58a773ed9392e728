#include "server/delivery/secret.h"

#include <fcntl.h>
#include <sys/stat.h>
#include <unistd.h>

#include <algorithm>
#include <cerrno>
#include <system_error>

namespace hearthfront::server {
namespace {

constexpr std::size_t most_bytes = 4096;

std::string because(const std::string& path, int error) {
  return path + " cannot be read: " + std::generic_category().message(error) +
         "; put it there, readable to the daemon";
}

}  // namespace

Secret read_secret(const std::string& path, std::size_t least_bytes) {
  // Not to wait for a writer where the name is a pipe.
  const int file = open(path.c_str(), O_RDONLY | O_CLOEXEC | O_NONBLOCK);
  if (file < 0) return {"", because(path, errno)};
  struct stat about {};
  std::string text(most_bytes + 1, '\0');
  ssize_t got = -1;
  const bool plain = fstat(file, &about) == 0 && S_ISREG(about.st_mode);
  if (plain) got = read(file, text.data(), text.size());
  const int error = errno;
  close(file);
  if (!plain) return {"", path + " is no plain file; a secret is a file with nothing else in it"};
  if (got < 0) return {"", because(path, error)};
  text.resize(static_cast<std::size_t>(got));
  if (text.size() > most_bytes)
    return {"", path + " is longer than 4096 bytes, so it is hardly the right file"};
  while (!text.empty() && (text.back() == '\n' || text.back() == '\r')) text.pop_back();
  if (text.size() < least_bytes)
    return {"", path + " holds " + std::to_string(text.size()) + " bytes, " + std::to_string(least_bytes) +
                    " are the least"};
  if (std::any_of(text.begin(), text.end(), [](char c) { return (c >= 0 && c < 0x20) || c == 0x7f; }))
    return {"", path + " must hold one line of text without control characters"};
  return {std::move(text), ""};
}

std::string unreadable(const std::string& path) {
  if (path.empty() || access(path.c_str(), R_OK) == 0) return "";
  return because(path, errno);
}

Secret read_login(const std::string& user, const std::string& password_file, const std::string& ca_file) {
  Secret password;
  if (!user.empty()) password = read_secret(password_file, 1);
  if (password.fault.empty()) password.fault = unreadable(ca_file);
  return password;
}

}  // namespace hearthfront::server
