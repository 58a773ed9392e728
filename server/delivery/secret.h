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

}  // namespace hearthfront::server
