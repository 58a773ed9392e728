#include "server/ingest/json_fault.h"

#include <algorithm>

#include "server/base/utf8.h"

namespace hearthfront::server {
namespace {

bool is_digit(char c) {
  return c >= '0' && c <= '9';
}
bool is_blank(char c) {
  return c == ' ' || c == '\t' || c == '\n' || c == '\r';
}
bool is_word(char c) {
  return is_digit(c) || (c >= 'a' && c <= 'z') || (c >= 'A' && c <= 'Z') || c == '.' || c == '_';
}

// The word of letters and digits around the place, in lower case.
std::string word_at(std::string_view body, std::size_t place) {
  std::size_t first = place, last = place;
  while (first > 0 && place - first < 40 && is_word(body[first - 1])) --first;
  while (last < body.size() && last - place < 40 && is_word(body[last])) ++last;
  std::string word(body.substr(first, last - first));
  for (char& c : word) c = c >= 'A' && c <= 'Z' ? static_cast<char>(c - 'A' + 'a') : c;
  return word;
}

std::size_t start_of_word(std::string_view body, std::size_t place) {
  while (place > 0 && is_word(body[place - 1])) --place;
  return place;
}

// The last character before `place` that is no blank, NUL where there is none.
char before(std::string_view body, std::size_t place, std::size_t& found) {
  while (place > 0 && is_blank(body[place - 1])) --place;
  found = place == 0 ? 0 : place - 1;
  return place == 0 ? '\0' : body[place - 1];
}

std::string hint_for(std::string_view body, std::size_t place) {
  const std::size_t first = std::min(body.find_first_not_of(" \t\r\n"), body.size());
  if (first == body.size()) return "the body is empty";
  if (place >= body.size()) return "the body ends too early: was it cut off?";
  if (body[first] == '<') return "this looks like HTML or XML";
  if (place <= first + 1 && body[first] != '{' && body[first] != '[') {
    return "it must begin with {; CSV goes to /api/v1/furnaces/{id}/log";
  }
  if (!valid_utf8(body)) return "the bytes are not UTF-8: send the text in UTF-8";
  const char c = body[place];
  const std::string word = word_at(body, place);
  if (word == "nan" || word == "inf" || word == "infinity") {
    return "JSON has no NaN or Infinity: leave such readings out";
  }
  if (word == "none" || word == "true" || word == "false")
    return "the words are null, true and false, in small letters";
  std::size_t earlier = 0;
  const std::size_t start = is_word(c) ? start_of_word(body, place) : place;
  const char preceding = before(body, start, earlier);
  if (is_digit(c) && preceding == ',' && earlier > 0 && is_digit(body[earlier - 1])) {
    return "a decimal comma? JSON numbers have a decimal point";
  }
  if ((c == ']' || c == '}') && preceding == ',') return "a comma stands before the closing bracket";
  if (c == '\'') return "strings stand in double quotes";
  if (c == '/' || c == '#') return "JSON has no comments";
  if (c == '+') return "a number has no plus sign";
  if (is_digit(c) && start + 1 < body.size() && body[start] == '0' && is_digit(body[start + 1])) {
    return "a number has no leading zero";
  }
  if (c == '\n' || c == '\r' || c == '\t')
    return "line breaks and tabs inside a string are written \\n and \\t";
  if (c == '{' && preceding == '}') return "a comma is missing between two objects";
  if (c == '"') return "a comma or a colon is missing before the quote";
  return {};
}

}  // namespace

std::string json_fault_detail(std::string_view body, std::size_t byte) {
  const std::size_t place = byte == 0 ? 0 : std::min(byte - 1, body.size());
  const std::string_view read = body.substr(0, place);
  const auto line = std::count(read.begin(), read.end(), '\n') + 1;
  const std::size_t line_start = read.rfind('\n') == std::string_view::npos ? 0 : read.rfind('\n') + 1;
  std::string detail = "The body is not valid JSON at byte " + std::to_string(place + 1) + " (line " +
                       std::to_string(line) + ", column " + std::to_string(place - line_start + 1) + ")";
  const std::string hint = hint_for(body, place);
  return detail + (hint.empty() ? "." : ": " + hint + (hint.back() == '?' ? "" : "."));
}

}  // namespace hearthfront::server
