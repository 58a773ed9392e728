// A TOML file as a plain tree, and the strict way to read it: every getter names its key, checks type and
// range and reports with file:line:column; finish() refuses keys that nobody asked for. Absent keys leave
// the caller's default alone. One thread; all faults go to ConfigErrors, nothing throws.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "server/base/plant.h"

namespace hearthfront::server {

struct ConfigPlace {
  unsigned line = 0, column = 0;  // from 1
};

struct ConfigMember;

struct ConfigValue {
  enum class Kind { boolean, integer, real, text, date_time, array, table };
  Kind kind = Kind::table;
  ConfigPlace place;
  bool boolean = false;
  std::int64_t integer = 0;
  double real = 0;
  std::string text;
  std::vector<ConfigValue> array;
  std::vector<ConfigMember> table;  // in the order of the file
};

struct ConfigMember {
  std::string key;
  ConfigPlace place;
  ConfigValue value;
};

// Empty (with the fault in `errors`) where the file cannot be read, is no TOML or is above 1 MiB.
std::optional<ConfigValue> parse_toml_file(const std::string& path, ConfigErrors& errors);

class ConfigTable {
 public:
  // `name` is how messages call the table, e.g. "[listen]"; `file` and `value` must outlive it.
  ConfigTable(const std::string& file, const ConfigValue& value, std::string name, ConfigErrors& errors);

  // Each returns whether the key is there and right.
  bool text(std::string_view key, std::string& into, std::size_t min_length = 1,
            std::size_t max_length = 200);
  bool boolean(std::string_view key, bool& into);
  bool integer(std::string_view key, std::int64_t& into, std::int64_t low, std::int64_t high);
  bool number(std::string_view key, double& into, double low, double high);  // an integer will do
  bool number(std::string_view key, std::optional<double>& into, double low, double high);
  bool raw_text(std::string_view key, std::string& into);  // any string, control characters included
  bool texts(std::string_view key, std::vector<std::string>& into, std::size_t most,
             std::size_t max_length);  // an array of strings without control characters
  bool numbers(std::string_view key, std::vector<double>& into, std::size_t count, double low, double high);
  std::optional<ConfigTable> table(std::string_view key);
  std::vector<ConfigTable> tables(std::string_view key);  // [[key]] or key = [{...}, {...}]

  bool has(std::string_view key) const;
  bool has_empty_array(std::string_view key) const;
  std::vector<std::string> keys() const;
  void require(std::string_view key, std::string_view why);    // reports where it is missing
  void fault(std::string_view key, std::string_view message);  // at the key's value, or at the table
  void fault_here(std::string_view message);                   // at the table itself
  std::string where(std::string_view key) const;  // file:line:column of the key's value or the table
  void finish();                                  // reports unknown keys

 private:
  const ConfigMember* find(std::string_view key);
  const ConfigMember* find_of(std::string_view key, ConfigValue::Kind kind, std::string_view expected);
  void report(ConfigPlace place, std::string_view message);

  const std::string& file_;
  const ConfigValue& value_;
  std::string name_;
  ConfigErrors& errors_;
  std::vector<std::string> asked_;
};

}  // namespace hearthfront::server
