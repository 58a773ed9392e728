// Problem details (RFC 9457) written by hand, so that the front needs no JSON library to refuse a request.
#include "server/api/http_server.h"
#include "server/api/http_text.h"

namespace hearthfront::server {

Response problem_response(const Problem& problem) {
  Response response;
  response.status = problem.status;
  response.content_type = "application/problem+json";
  response.body = "{\"type\":" + json_quoted("/problems/" + problem.type) +
                  ",\"title\":" + json_quoted(problem.title) +
                  ",\"status\":" + std::to_string(problem.status);
  if (!problem.detail.empty()) response.body += ",\"detail\":" + json_quoted(problem.detail);
  if (!problem.field.empty()) response.body += ",\"field\":" + json_quoted(problem.field);
  response.body += "}";
  return response;
}

}  // namespace hearthfront::server
