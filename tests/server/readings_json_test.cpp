// Bodies of POST /api/v1/readings: what is taken, and the likeliest faults with their answers.
// JSON: RFC 8259. The choice of faults and words is our own contract: common practice, no source.
#include "server/ingest/readings_json.h"

#include <doctest/doctest.h>

#include <string>

using namespace hearthfront::server;

namespace {

const std::string good =
    R"({"furnace":"pit-2","channel":"temperature","time":"2026-03-02T06:05:00Z","value":928.4})";

std::string list(const std::string& items) {
  return "{\"readings\":[" + items + "]}";
}

// The problem of the whole body as "status type field: detail", or "none".
std::string problem_of(std::string_view body, std::size_t max_items = 10'000) {
  const DecodedReadings decoded = decode_readings(body, max_items);
  if (!decoded.problem) return "none";
  CHECK(decoded.items.empty());
  const Problem& problem = *decoded.problem;
  return std::to_string(problem.status) + " " + problem.type + " " + problem.field + ": " + problem.detail;
}

// The refusal of the one item as "reason: detail", or "none".
std::string refusal_of(const std::string& item) {
  const DecodedReadings decoded = decode_readings(list(item), 10);
  REQUIRE(!decoded.problem);
  REQUIRE(decoded.items.size() == 1);
  const RawReading& reading = decoded.items[0];
  if (reading.refusal == Refusal::none) return "none";
  return std::string(text(reading.refusal)) + ": " + reading.detail;
}

}  // namespace

TEST_CASE("a good reading comes out as it went in") {
  const DecodedReadings decoded = decode_readings(list(good), 10);
  REQUIRE(!decoded.problem);
  REQUIRE(decoded.items.size() == 1);
  const RawReading& reading = decoded.items[0];
  CHECK(reading.refusal == Refusal::none);
  CHECK(reading.furnace == "pit-2");
  CHECK(reading.channel == "temperature");
  CHECK(reading.time_us == 1772431500'000'000);
  CHECK(reading.value == 928.4);
}

TEST_CASE("members in any order, integers, exponents, escapes and a byte order mark are fine") {
  const DecodedReadings decoded = decode_readings(
      "\xef\xbb\xbf{ \"readings\" : [ "
      "{\"value\":-9.3e2,\"time\":\"2026-03-02T06:05:00Z\",\"channel\":\"\\u00e4\","
      "\"furnace\":\"f\"}, "
      "{\"value\":930,\"time\":\"2026-03-02T06:05:00Z\",\"channel\":\"c\",\"furnace\":\"f\"} ] }\n",
      10);
  REQUIRE(!decoded.problem);
  REQUIRE(decoded.items.size() == 2);
  CHECK(decoded.items[0].value == -930.0);
  CHECK(decoded.items[0].channel == "ä");
  CHECK(decoded.items[1].value == 930.0);
  CHECK(decoded.items[1].refusal == Refusal::none);
}

TEST_CASE("an empty list is a list") {
  const DecodedReadings decoded = decode_readings("{\"readings\":[]}", 10);
  CHECK(!decoded.problem);
  CHECK(decoded.items.empty());
}

TEST_CASE("one bad item does not harm its neighbours and keeps its place") {
  const DecodedReadings decoded = decode_readings(list(good + ",{\"value\":\"x\"}," + good), 10);
  REQUIRE(!decoded.problem);
  REQUIRE(decoded.items.size() == 3);
  CHECK(decoded.items[0].refusal == Refusal::none);
  CHECK(decoded.items[1].refusal == Refusal::wrong_type);
  CHECK(decoded.items[1].value_text == "x");
  CHECK(decoded.items[2].refusal == Refusal::none);
}

TEST_CASE("the likeliest faults of an item have one exact answer each") {
  struct Fault {
    std::string item, refusal;
  };
  const std::string start = R"({"furnace":"f","channel":"c","time":"2026-03-02T06:05:00Z")";
  const Fault faults[] = {
      {good, "none"},
      {start + R"(,"value":"928.4"})", "wrong type: value is a string; send a number without quotes"},
      {start + R"(,"value":null})",
       "wrong type: value is null; leave the reading out where there is no value"},
      {start + R"(,"value":true})", "wrong type: value is true or false; expected a number"},
      {start + R"(,"value":[1,[2]]})", "wrong type: value is an array; expected a number"},
      {start + R"(,"value":{"v":1}})", "wrong type: value is an object; expected a number"},
      {start + "}", "missing member: value is missing"},
      {start + R"(,"value":1,"value":2})", "repeated member: value stands twice"},
      {start + R"(,"value":1,"unit":"degC"})",
       "unknown member: \"unit\"; a reading has furnace, channel, time and value"},
      {start + R"(,"vlaue":1})",
       "unknown member: \"vlaue\" (did you mean \"value\"?); a reading has furnace, channel, time and value"},
      {R"({"furnace":7,"channel":"c","time":"2026-03-02T06:05:00Z","value":1})",
       "wrong type: furnace is a number; expected a string"},
      {R"({"furnace":"f","channel":"c","time":1772431500,"value":1})",
       "wrong type: time is a number; expected a string such as \"2026-03-02T06:05:00Z\""},
      {R"({"furnace":"f","channel":"c","time":"02.03.2026 06:05","value":1})",
       "bad time: the date is not written YYYY-MM-DD; expected RFC 3339 such as \"2026-03-02T06:05:00Z\""},
      {R"({"furnace":"f","channel":"c","time":"2026-03-02T06:05:00","value":1})",
       "bad time: Z or an offset such as +01:00 must follow the time; expected RFC 3339 such as "
       "\"2026-03-02T06:05:00Z\""},
      {"{}", "missing member: furnace is missing"},
      {"42", "not an object: the item is a number; expected an object with furnace, channel, time and value"},
      {"[" + good + "]",
       "not an object: the item is an array; expected an object with furnace, channel, time and value"},
      {"null", "not an object: the item is null; expected an object with furnace, channel, time and value"},
  };
  for (const Fault& fault : faults) {
    CAPTURE(fault.item);
    CHECK(refusal_of(fault.item) == fault.refusal);
  }
}

TEST_CASE("a body of the wrong shape is refused as a whole") {
  CHECK(problem_of("[" + good + "]") ==
        "422 bad-readings : The body is an array; expected an object: "
        "{\"readings\":[{\"furnace\":…,\"channel\":…,\"time\":…,\"value\":…}]}.");
  CHECK(problem_of("{}") == "422 bad-readings readings: The member \"readings\" is missing.");
  CHECK(problem_of("{\"readings\":" + good + "}") ==
        "422 bad-readings readings: \"readings\" is an object; expected an array.");
  CHECK(problem_of("{\"readings\":null}") ==
        "422 bad-readings readings: \"readings\" is null; expected an array.");
  CHECK(problem_of("{\"reading\":[]}") ==
        "422 bad-readings reading: Unknown member \"reading\" (did you mean \"readings\"?); the body holds "
        "\"readings\" only.");
  CHECK(problem_of("{\"readings\":[],\"readings\":[]}") ==
        "422 bad-readings readings: \"readings\" stands twice; send one list.");
  CHECK(problem_of(list(good + "," + good + "," + good), 2) ==
        "413 too-many-readings readings: More than 2 readings; split them over several requests.");
}

TEST_CASE("a body nested too deeply is refused before it costs anything") {
  const auto nested = [](std::size_t levels) {
    return list(std::string(levels, '[') + std::string(levels, ']'));
  };
  CHECK(problem_of(nested(30)) == "none");  // and its item is refused as no object
  CHECK(problem_of(nested(31)) == "422 bad-readings : The body is nested deeper than 32 levels.");
  CHECK(problem_of(list(std::string(1'000'000, '['))) ==
        "422 bad-readings : The body is nested deeper than 32 levels.");
}

TEST_CASE("broken JSON is answered with the place and the usual cause") {
  struct Fault {
    std::string body, detail;
  };
  const std::string at = "The body is not valid JSON at byte ";
  const Fault faults[] = {
      {"", at + "1 (line 1, column 1): the body is empty."},
      {"  \n", at + "4 (line 2, column 1): the body is empty."},
      {"{\"readings\":[", at + "14 (line 1, column 14): the body ends too early: was it cut off?"},
      {"{\"readings\":[{\"value\":NaN}]}",
       at + "23 (line 1, column 23): JSON has no NaN or Infinity: leave such readings out."},
      {"{\"readings\":[{\"value\":nan}]}",
       at + "24 (line 1, column 24): JSON has no NaN or Infinity: leave such readings out."},
      {"{\"readings\":[{\"value\":-Infinity}]}",
       at + "24 (line 1, column 24): JSON has no NaN or Infinity: leave such readings out."},
      {"{\"readings\":[{\"value\":928,4}]}",
       at + "27 (line 1, column 27): a decimal comma? JSON numbers have a decimal point."},
      {"{'readings':[]}", at + "2 (line 1, column 2): strings stand in double quotes."},
      {"{\"readings\":[],}", at + "16 (line 1, column 16): a comma stands before the closing bracket."},
      {"{\"readings\":[1,\n]}", at + "17 (line 2, column 1): a comma stands before the closing bracket."},
      {"{\"readings\":[]} // all", at + "17 (line 1, column 17): JSON has no comments."},
      {"{\"readings\":[{\"value\":None}]}",
       at + "23 (line 1, column 23): the words are null, true and false, in small letters."},
      {"{\"readings\":[{\"value\":+5}]}", at + "23 (line 1, column 23): a number has no plus sign."},
      {"{\"readings\":[{\"value\":05}]}", at + "24 (line 1, column 24): a number has no leading zero."},
      {"{\"readings\":[{\"time\":\"a\nb\"}]}",
       at + "24 (line 1, column 24): line breaks and tabs inside a string are written \\n and \\t."},
      {"{\"readings\":[{\"time\":\"a\xb0\"}]}",
       at + "24 (line 1, column 24): the bytes are not UTF-8: send the text in UTF-8."},
      {"{\"readings\":[{}{}]}", at + "16 (line 1, column 16): a comma is missing between two objects."},
      {"{\"readings\" \"x\"}",
       at + "15 (line 1, column 15): a comma or a colon is missing before the quote."},
      {"<html></html>", at + "1 (line 1, column 1): this looks like HTML or XML."},
      {"Time;TC1\n",
       at + "1 (line 1, column 1): it must begin with {; CSV goes to /api/v1/furnaces/{id}/log."},
      {"{\"readings\":[]}}", at + "16 (line 1, column 16)."},
  };
  for (const Fault& fault : faults) {
    CAPTURE(fault.body);
    CHECK(problem_of(fault.body) == "400 broken-json : " + fault.detail);
  }
}

TEST_CASE("a number beyond a 64-bit float is told apart from broken JSON") {
  CHECK(problem_of("{\"readings\":[{\"value\":1e999}]}") ==
        "400 broken-json : The number that ends at byte 27 is too large for a 64-bit floating point number.");
}

TEST_CASE("every cut of a good body is refused, and none harms the decoder") {
  const std::string body = list(good + "," + good);
  for (std::size_t length = 0; length < body.size(); ++length) {
    CAPTURE(length);
    CHECK(decode_readings(std::string_view(body).substr(0, length), 10).problem);
  }
}

TEST_CASE("every single damaged byte is answered, never thrown") {
  const std::string body = list(good);
  std::size_t refused = 0;
  for (std::size_t place = 0; place < body.size(); ++place) {
    for (const char damage : {'\0', '"', '{', ']', ',', '\\', '\x80', '\xff', '9', 'e'}) {
      std::string damaged = body;
      damaged[place] = damage;
      const DecodedReadings decoded = decode_readings(damaged, 10);
      const bool taken =
          !decoded.problem && decoded.items.size() == 1 && decoded.items[0].refusal == Refusal::none;
      if (!taken) ++refused;
      if (decoded.problem) CHECK(!decoded.problem->detail.empty());
    }
  }
  CHECK(refused > body.size() * 5);  // most damage is noticed; some bytes inside names and digits cannot be
}

TEST_CASE("a very long text is kept short") {
  const DecodedReadings decoded = decode_readings(
      list(R"({"furnace":")" + std::string(5000, 'x') + R"(","channel":"c","time":"t","value":1})"), 10);
  REQUIRE(decoded.items.size() == 1);
  CHECK(decoded.items[0].furnace.size() == 200);
}
