#include "server/ingest/readings_json.h"

#include <algorithm>
#include <array>
#include <nlohmann/json.hpp>

#include "server/base/nearest.h"
#include "server/base/number_text.h"
#include "server/base/time_text.h"
#include "server/base/utf8.h"
#include "server/ingest/json_fault.h"

namespace hearthfront::server {
namespace {

using Json = nlohmann::json;

constexpr std::size_t max_depth = 32;
const std::vector<std::string> members{"furnace", "channel", "time", "value"};

// One value as the parser hands it over.
struct Scalar {
  std::string_view kind;  // as messages call it
  bool is_text = false, is_number = false;
  std::string_view text{};  // as written; lives until the parser goes on
  double number = 0;
};

// Builds items while the parser runs, so that no tree of the whole body is ever held.
class ReadingsHandler final : public nlohmann::json_sax<Json> {
 public:
  ReadingsHandler(std::string_view body, std::size_t max_items, DecodedReadings& decoded)
      : body_(body), max_items_(max_items), decoded_(decoded) {}

  bool null() override { return take({"null"}); }
  bool boolean(bool yes) override { return take({"true or false", false, false, yes ? "true" : "false"}); }
  bool number_integer(number_integer_t number) override {
    written_ = std::to_string(number);
    return take({"a number", false, true, written_, static_cast<double>(number)});
  }
  bool number_unsigned(number_unsigned_t number) override {
    written_ = std::to_string(number);
    return take({"a number", false, true, written_, static_cast<double>(number)});
  }
  bool number_float(number_float_t number, const string_t& written) override {
    return take({"a number", false, true, written, number});
  }
  bool string(string_t& text) override { return take({"a string", true, false, text}); }
  bool binary(binary_t&) override { return false; }  // not in JSON text

  bool start_object(std::size_t) override {
    if (depth_ == 2 && in_readings_) {
      if (!new_item()) return false;
      in_item_ = true;
      seen_ = {};
      time_text_.clear();
      return ++depth_, true;
    }
    return open("an object", depth_ == 0);
  }
  bool start_array(std::size_t) override {
    if (depth_ == 1 && key_ == "readings") {
      in_readings_ = true;
      return ++depth_, true;
    }
    return open("an array", false);
  }
  bool end_object() override {
    --depth_;
    if (depth_ == 2 && in_item_) {
      in_item_ = false;
      finish_item();
    }
    return true;
  }
  bool end_array() override {
    if (--depth_ == 1) in_readings_ = false;
    return true;
  }

  bool key(string_t& name) override {
    if (depth_ == 1) return top_key(name);
    if (depth_ == 3 && in_item_) key_ = name;
    return true;
  }

  bool parse_error(std::size_t byte, const std::string&, const nlohmann::detail::exception& fault) override {
    if (fault.id == 406) {  // the only fault of a number that is well-formed
      return refuse_body(400, "broken-json", "The body is not usable JSON",
                         "The number that ends at byte " + std::to_string(byte) +
                             " is too large for a 64-bit floating point number.");
    }
    return refuse_body(400, "broken-json", "The body is not valid JSON", json_fault_detail(body_, byte));
  }

  bool found_readings() const { return found_readings_; }

 private:
  bool refuse_body(int status, std::string type, std::string title, std::string detail,
                   std::string field = {}) {
    decoded_.problem =
        Problem{status, std::move(type), std::move(title), std::move(detail), std::move(field)};
    return false;
  }
  bool bad_shape(std::string detail, std::string field) {
    return refuse_body(422, "bad-readings", "The body is not a list of readings", std::move(detail),
                       std::move(field));
  }

  bool top_key(const std::string& name) {
    if (name != "readings") {
      return bad_shape("Unknown member \"" + clean_text(name, 60) + "\"" + suggestion(name, {"readings"}) +
                           "; the body holds \"readings\" only.",
                       clean_text(name, 60));
    }
    if (found_readings_) return bad_shape("\"readings\" stands twice; send one list.", "readings");
    found_readings_ = true;
    key_ = name;
    return true;
  }

  // A container that is not one of the three levels we expect.
  bool open(std::string_view kind, bool expected) {
    if (depth_ >= max_depth) {
      return bad_shape("The body is nested deeper than " + std::to_string(max_depth) + " levels.", {});
    }
    if (!expected && !take({kind})) return false;
    ++depth_;
    return true;
  }

  // A value, or the beginning of an object or array in a place where it does not belong.
  bool take(const Scalar& value) {
    if (depth_ == 0) {
      return bad_shape(
          "The body is " + std::string(value.kind) +
              "; expected an object: {\"readings\":[{\"furnace\":…,\"channel\":…,\"time\":…,\"value\":…}]}.",
          {});
    }
    if (depth_ == 1) {
      return bad_shape("\"readings\" is " + std::string(value.kind) + "; expected an array.", "readings");
    }
    if (depth_ == 2) {
      if (!new_item()) return false;
      refuse(Refusal::not_an_object, "the item is " + std::string(value.kind) +
                                         "; expected an object with furnace, channel, time and value");
      return true;
    }
    if (depth_ == 3 && in_item_) take_member(value);
    return true;
  }

  void take_member(const Scalar& value) {
    std::size_t index = 0;
    while (index < members.size() && members[index] != key_) ++index;
    if (index == members.size()) {
      refuse(Refusal::unknown_member, "\"" + clean_text(key_, 60) + "\"" + suggestion(key_, members) +
                                          "; a reading has furnace, channel, time and value");
      return;
    }
    if (seen_[index]) {
      refuse(Refusal::repeated_member, members[index] + " stands twice");
      return;
    }
    seen_[index] = true;
    RawReading& item = decoded_.items.back();
    if (index == 3) {
      item.value = value.number;
      if (value.is_number) return;  // it can be written again from the number
      item.value_text = clean_text(value.text);
      refuse(Refusal::wrong_type, wrong_value(value));
      return;
    }
    if (index == 2)
      time_text_ = value.text;
    else
      (index == 0 ? item.furnace : item.channel) = clean_text(value.text);
    if (!value.is_text) {
      refuse(Refusal::wrong_type, members[index] + " is " + std::string(value.kind) + "; expected a string" +
                                      (index == 2 ? " such as \"2026-03-02T06:05:00Z\"" : ""));
    }
  }

  static std::string wrong_value(const Scalar& value) {
    if (value.is_text) return "value is a string; send a number without quotes";
    if (value.kind == "null") return "value is null; leave the reading out where there is no value";
    return "value is " + std::string(value.kind) + "; expected a number";
  }

  bool new_item() {
    if (decoded_.items.size() >= max_items_) {
      return refuse_body(
          413, "too-many-readings", "Too many readings in one body",
          "More than " + std::to_string(max_items_) + " readings; split them over several requests.",
          "readings");
    }
    decoded_.items.emplace_back();
    return true;
  }

  // The first fault is the one that is told.
  void refuse(Refusal refusal, std::string detail) {
    RawReading& item = decoded_.items.back();
    if (item.refusal != Refusal::none) return;
    item.refusal = refusal;
    item.detail = std::move(detail);
  }

  void finish_item() {
    for (std::size_t i = 0; i < members.size(); ++i) {
      if (!seen_[i]) refuse(Refusal::missing_member, members[i] + " is missing");
    }
    RawReading& item = decoded_.items.back();
    if (item.refusal == Refusal::none) {
      std::string reason;
      if (const auto time_us = parse_time(time_text_, reason)) {
        item.time_us = *time_us;
        return;  // it can be written again from the number
      }
      refuse(Refusal::bad_time, reason + "; expected RFC 3339 such as \"2026-03-02T06:05:00Z\"");
    }
    item.time_text = clean_text(time_text_);
  }

  const std::string_view body_;
  const std::size_t max_items_;
  DecodedReadings& decoded_;
  std::size_t depth_ = 0;
  bool found_readings_ = false, in_readings_ = false, in_item_ = false;
  std::string key_, written_, time_text_;  // kept for their memory
  std::array<bool, 4> seen_{};
};

}  // namespace

DecodedReadings decode_readings(std::string_view body, std::size_t max_items) {
  DecodedReadings decoded;
  constexpr std::size_t usual_item_bytes = 80;
  decoded.items.reserve(std::min(max_items, body.size() / usual_item_bytes + 1));
  ReadingsHandler handler(body, max_items, decoded);
  const bool whole = Json::sax_parse(body.begin(), body.end(), &handler);
  if (whole && !handler.found_readings()) {
    decoded.problem = Problem{422, "bad-readings", "The body is not a list of readings",
                              "The member \"readings\" is missing.", "readings"};
  }
  if (decoded.problem) decoded.items.clear();
  return decoded;
}

}  // namespace hearthfront::server
