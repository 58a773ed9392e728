#include "server/delivery/resolve.h"

#include <netdb.h>

#include <cerrno>
#include <ctime>
#include <memory>

namespace hearthfront::server {
namespace {

struct Request {
  std::string host;
  gaicb item{};
  gaicb* list[1] = {&item};
};

}  // namespace

std::string unresolvable(const std::string& host, std::chrono::steady_clock::time_point until,
                         const std::stop_token& stop) {
  auto request = std::make_unique<Request>();
  request->host = host;
  request->item.ar_name = request->host.c_str();
  if (const int error = getaddrinfo_a(GAI_NOWAIT, request->list, 1, nullptr); error != 0)
    return gai_strerror(error);
  int error = EAI_INPROGRESS;
  while (error == EAI_INPROGRESS && std::chrono::steady_clock::now() < until && !stop.stop_requested()) {
    const timespec step{0, 100'000'000};
    gai_suspend(request->list, 1, &step);
    error = gai_error(&request->item);
  }
  if (error == EAI_INPROGRESS && gai_cancel(&request->item) != EAI_CANCELED) {
    // The resolver's own thread still works on it: what it writes into must stay.
    static_cast<void>(request.release());
    return "the name was not resolved in time";
  }
  if (request->item.ar_result != nullptr) freeaddrinfo(request->item.ar_result);
  return error == 0                ? ""
         : error == EAI_INPROGRESS ? "the name was not resolved in time"
                                   : gai_strerror(error);
}

}  // namespace hearthfront::server
