// The dependency rule, read from the sources: solver knows itself, storage knows itself, server knows all
// three (DEVELOPERS.md). The build keeps it too; this says which line breaks it.
#include <doctest/doctest.h>

#include <filesystem>
#include <fstream>
#include <map>
#include <set>
#include <string>

namespace fs = std::filesystem;

TEST_CASE("each room includes only the rooms it may know") {
  const std::map<std::string, std::set<std::string>> allowed{
      {"solver", {"solver"}}, {"storage", {"storage"}}, {"server", {"server", "solver", "storage"}}};
  std::size_t includes = 0;
  for (const auto& [room, known] : allowed) {
    for (const auto& entry : fs::recursive_directory_iterator(fs::path(HF_SOURCE_DIR) / room)) {
      const std::string ending = entry.path().extension();
      if (ending != ".h" && ending != ".cpp") continue;
      std::ifstream in(entry.path());
      for (std::string line; std::getline(in, line);) {
        if (!line.starts_with("#include \"")) continue;
        const std::string name = line.substr(10, line.find('"', 10) - 10);
        CAPTURE(entry.path().string());
        CAPTURE(name);
        CHECK(known.contains(name.substr(0, name.find('/'))));
        CHECK(name.find("..") == std::string::npos);
        ++includes;
      }
    }
  }
  CHECK(includes > 100);
}

TEST_CASE("our headers bring no heavy header") {
  const std::set<std::string> heavy{"httplib.h",       "toml++/toml.h", "CLI/CLI.hpp",
                                    "spdlog/spdlog.h", "Eigen/Dense",   "SQLiteCpp/SQLiteCpp.h"};
  // These three bring nlohmann's and say so in their first lines.
  const std::set<std::string> json_headers{"json_fields.h", "definition_fields.h", "result_fields.h"};
  for (const char* room : {"solver", "storage", "server"}) {
    for (const auto& entry : fs::recursive_directory_iterator(fs::path(HF_SOURCE_DIR) / room)) {
      if (entry.path().extension() != ".h") continue;
      std::ifstream in(entry.path());
      for (std::string line; std::getline(in, line);) {
        if (!line.starts_with("#include <")) continue;
        const std::string name = line.substr(10, line.find('>') - 10);
        CAPTURE(entry.path().string());
        CHECK_FALSE(heavy.contains(name));
        if (name == "nlohmann/json.hpp") CHECK(json_headers.contains(entry.path().filename()));
      }
    }
  }
}
