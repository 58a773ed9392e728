// A store in a folder of its own that goes with it.
#pragma once

#include <unistd.h>

#include <atomic>
#include <filesystem>
#include <string>

#include "storage/store.h"

namespace hearthfront::server::test {

class StoreFolder {
 public:
  StoreFolder() {
    static std::atomic<int> made{0};
    path_ = std::filesystem::temp_directory_path() /
            ("hf-live-" + std::to_string(getpid()) + "-" + std::to_string(++made));
    std::filesystem::create_directories(path_);
  }
  ~StoreFolder() { std::filesystem::remove_all(path_); }
  StoreFolder(const StoreFolder&) = delete;
  StoreFolder& operator=(const StoreFolder&) = delete;
  storage::StoreOptions options() const {
    storage::StoreOptions options;
    options.path = path_ / "test.db";
    return options;
  }

 private:
  std::filesystem::path path_;
};

}  // namespace hearthfront::server::test
