// The one place where cpp-httplib works: it composes the bytes of an answer (status line, headers, gzip)
// in memory. It is shown no byte of the client's, since its parser misreads much of what http_head refuses.
// Thread-safe, immutable. Failure is std::runtime_error for headers that are not plain one-line text.
#pragma once

#include <memory>
#include <string>
#include <string_view>

#include "server/api/http_server.h"

namespace hearthfront::server {

struct AnswerFrame {
  bool head_only = false;     // HEAD: all but the body
  bool accepts_gzip = false;  // used for the dashboard's text files only
  bool keep_alive = false;
};

struct Reply {
  Response response;
  bool endless = false;  // an SSE stream: headers only, and the connection ends with it
};

class AnswerWriter {
 public:
  AnswerWriter();
  ~AnswerWriter();
  AnswerWriter(const AnswerWriter&) = delete;
  AnswerWriter& operator=(const AnswerWriter&) = delete;

  std::string answer(const AnswerFrame& frame, Reply reply) const;

 private:
  class Library;
  std::unique_ptr<Library> library_;
};

bool accepts_gzip(std::string_view accept_encoding);  // RFC 9110 12.5.3, q=0 means no

}  // namespace hearthfront::server
