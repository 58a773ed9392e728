// Read-only connections for request threads: taken for one request, given back after it. Thread-safe.
#pragma once

#include <exception>
#include <memory>
#include <mutex>
#include <string>
#include <vector>

#include "storage/store.h"

namespace hearthfront::server {

class ReaderPool {
 public:
  explicit ReaderPool(std::string path) : path_(std::move(path)) {}

  // Gives the reader back unless an exception is on its way: then the connection is closed, since what it
  // holds may be the cause.
  class Lease {
   public:
    Lease(ReaderPool& pool, std::unique_ptr<storage::Reader> reader)
        : pool_(pool), reader_(std::move(reader)), exceptions_(std::uncaught_exceptions()) {}
    ~Lease();
    Lease(const Lease&) = delete;
    Lease& operator=(const Lease&) = delete;
    storage::Reader* operator->() const { return reader_.get(); }
    storage::Reader& operator*() const { return *reader_; }

   private:
    ReaderPool& pool_;
    std::unique_ptr<storage::Reader> reader_;
    int exceptions_;
  };
  Lease take();

 private:
  std::string path_;
  std::mutex mutex_;
  std::vector<std::unique_ptr<storage::Reader>> idle_;
};

}  // namespace hearthfront::server
