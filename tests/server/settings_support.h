// A folder of its own for each test that needs files; removed at the end.
#pragma once

#include <stdlib.h>

#include <filesystem>
#include <fstream>
#include <stdexcept>
#include <string>
#include <string_view>
#include <vector>

namespace hearthfront::test {

class ScratchFolder {
 public:
  ScratchFolder() {
    std::string pattern = (std::filesystem::temp_directory_path() / "hearthfront-test-XXXXXX").string();
    if (mkdtemp(pattern.data()) == nullptr) throw std::runtime_error("no scratch folder: " + pattern);
    path_ = pattern;
  }
  ~ScratchFolder() {
    std::error_code ignored;
    std::filesystem::remove_all(path_, ignored);
  }
  ScratchFolder(const ScratchFolder&) = delete;
  ScratchFolder& operator=(const ScratchFolder&) = delete;

  std::string path(const std::string& name) const { return path_ + "/" + name; }
  std::string write(const std::string& name, std::string_view text) const {
    std::ofstream stream(path(name), std::ios::binary);
    stream << text;
    if (!stream.flush()) throw std::runtime_error("cannot write " + path(name));
    return path(name);
  }

 private:
  std::string path_;
};

// Messages as one text, the folder's name taken out.
inline std::string joined(const std::vector<std::string>& messages, const ScratchFolder& folder) {
  std::string all;
  for (std::string message : messages) {
    const std::string prefix = folder.path("");
    for (std::size_t at = message.find(prefix); at != std::string::npos; at = message.find(prefix)) {
      message.erase(at, prefix.size());
    }
    all += (all.empty() ? "" : "\n") + message;
  }
  return all;
}

}  // namespace hearthfront::test
