#include "server/base/json_fields.h"

#include <algorithm>
#include <cmath>
#include <cstdio>
#include <set>

#include "server/base/time_text.h"
#include "server/ingest/json_fault.h"

namespace hearthfront::server {
namespace {

constexpr int max_depth = 32;

Problem broken(std::string detail) {
  return {400, "broken-json", "The body is not JSON", std::move(detail), ""};
}

std::string short_number(double value) {
  char text[32];
  std::snprintf(text, sizeof text, "%.6g", value);
  return text;
}

}  // namespace

std::string dumped(const Json& json) {
  return json.dump(-1, ' ', false, Json::error_handler_t::replace);
}

Json parse_body(std::string_view body) {
  std::vector<std::set<std::string>> members;
  const auto watch = [&](int depth, nlohmann::json::parse_event_t event, auto& parsed) {
    using Event = nlohmann::json::parse_event_t;
    if (depth > max_depth) throw broken("It is nested deeper than 32 levels; no document of ours is.");
    if (event == Event::object_start) members.emplace_back();
    if (event == Event::object_end) members.pop_back();
    if (event == Event::key && !members.back().insert(parsed.template get<std::string>()).second)
      throw broken("The member \"" + parsed.template get<std::string>() +
                   "\" stands twice in one object; leave out the wrong one.");
    return true;
  };
  try {
    return Json::parse(body.begin(), body.end(), [&](int depth, Json::parse_event_t event, Json& parsed) {
      return watch(depth, static_cast<nlohmann::json::parse_event_t>(event), parsed);
    });
  } catch (const Json::parse_error& error) {
    throw broken(json_fault_detail(body, error.byte));
  } catch (const Json::exception&) {
    throw broken("A number in it is too large to be read.");
  }
}

JsonFields::JsonFields(const Json& object, std::string path, std::string problem_type)
    : object_(object), path_(std::move(path)), type_(std::move(problem_type)) {
  if (!object.is_object()) {
    throw Problem{422, type_, "Not an object",
                  (path_.empty() ? "The body" : path_) + " must be a JSON object {...}.", path_};
  }
  for (const auto& [name, value] : object.items()) unread_.push_back(name);
}

bool JsonFields::has(std::string_view name) {
  const auto it = object_.find(name);
  if (it != object_.end() && it->is_null()) std::erase(unread_, name);
  return it != object_.end() && !it->is_null();
}

std::string JsonFields::path_of(std::string_view name) const {
  return path_.empty() ? std::string(name) : path_ + "." + std::string(name);
}

void JsonFields::fail(std::string_view name, const std::string& detail) const {
  throw Problem{422, type_, "The value cannot be used", path_of(name) + ": " + detail, path_of(name)};
}

const Json& JsonFields::take(std::string_view name) {
  std::erase(unread_, name);
  if (!has(name))
    throw Problem{422, type_, "A member is missing", path_of(name) + " is missing.", path_of(name)};
  return *object_.find(name);
}

const Json& JsonFields::any(std::string_view name) {
  return take(name);
}

bool JsonFields::flag(std::string_view name) {
  const Json& value = take(name);
  if (!value.is_boolean()) fail(name, "expected true or false.");
  return value.get<bool>();
}

std::string JsonFields::word(std::string_view name, std::size_t max_length) {
  const Json& value = take(name);
  if (!value.is_string()) fail(name, "expected a text in quotes.");
  const auto& text = value.get_ref<const std::string&>();
  const bool clean = std::none_of(text.begin(), text.end(),
                                  [](char c) { return static_cast<unsigned char>(c) < 0x20 || c == 0x7f; });
  const bool blank = std::all_of(text.begin(), text.end(), [](char c) { return c == ' '; });
  if (blank || text.size() > max_length || !clean)
    fail(name, "expected 1 to " + std::to_string(max_length) + " characters without line breaks.");
  return text;
}

double JsonFields::number(std::string_view name, double low, double high, std::string_view unit) {
  const Json& value = take(name);
  const std::string expected =
      "expected a number from " + short_number(low) + " to " + short_number(high) + " " + std::string(unit);
  if (!value.is_number()) fail(name, expected + ".");
  const double number = value.get<double>();
  if (!(number >= low && number <= high)) fail(name, expected + ", found " + short_number(number) + ".");
  return number;
}

int JsonFields::integer(std::string_view name, int low, int high) {
  const Json& value = take(name);
  const std::string expected =
      "expected a whole number from " + std::to_string(low) + " to " + std::to_string(high) + ".";
  if (!value.is_number_integer()) fail(name, expected);
  const auto number = value.get<std::int64_t>();
  if (number < low || number > high) fail(name, expected);
  return static_cast<int>(number);
}

std::int64_t JsonFields::time(std::string_view name) {
  const Json& value = take(name);
  if (!value.is_string()) fail(name, "expected a time such as \"2026-03-02T06:05:00Z\".");
  std::string reason;
  const auto time = parse_time(value.get_ref<const std::string&>(), reason);
  if (!time) fail(name, reason);
  return *time;
}

const Json& JsonFields::array(std::string_view name, std::size_t min_size, std::size_t max_size) {
  const Json& value = take(name);
  if (!value.is_array() || value.size() < min_size || value.size() > max_size)
    fail(name,
         "expected a list of " + std::to_string(min_size) + " to " + std::to_string(max_size) + " entries.");
  return value;
}

const Json& JsonFields::object(std::string_view name) {
  const Json& value = take(name);
  if (!value.is_object()) fail(name, "expected an object {...}.");
  return value;
}

void JsonFields::finish() const {
  if (unread_.empty()) return;
  throw Problem{422, type_, "A member is not known",
                path_of(unread_.front()) + " is not a member of this object; check the spelling.",
                path_of(unread_.front())};
}

}  // namespace hearthfront::server
