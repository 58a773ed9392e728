// Secrets come from files of their own, one to each file. Any thread.
#pragma once

#include <cstddef>
#include <string>

namespace hearthfront::server {

struct Secret {
  std::string text;
  std::string fault;  // what is wrong with the file and what to do, never with its content; empty: all right
};

// The file's content without line ends at its end. A fault: not readable, no plain file, shorter than
// `least_bytes`, longer than 4096 bytes, or with control characters in it.
Secret read_secret(const std::string& path, std::size_t least_bytes);

// Why a file that is only named to a library cannot be read; empty: it can, or `path` is empty.
std::string unreadable(const std::string& path);

// What a server that is logged in to needs: the password (empty without a user), and an authority's
// certificate that can be read. The fault is that of either.
Secret read_login(const std::string& user, const std::string& password_file, const std::string& ca_file);

}  // namespace hearthfront::server
