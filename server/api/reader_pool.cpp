#include "server/api/reader_pool.h"

#include <exception>

namespace hearthfront::server {

ReaderPool::Lease::~Lease() {
  if (std::uncaught_exceptions() > exceptions_) return;
  const std::scoped_lock lock(pool_.mutex_);
  pool_.idle_.push_back(std::move(reader_));
}

ReaderPool::Lease ReaderPool::take() {
  {
    const std::scoped_lock lock(mutex_);
    if (!idle_.empty()) {
      auto reader = std::move(idle_.back());
      idle_.pop_back();
      return {*this, std::move(reader)};
    }
  }
  return {*this, std::make_unique<storage::Reader>(path_)};
}

}  // namespace hearthfront::server
