#include "storage/files.h"

#include <fcntl.h>
#include <sys/file.h>
#include <sys/stat.h>
#include <unistd.h>

#include <array>
#include <cerrno>
#include <filesystem>
#include <system_error>

#include "storage/store.h"

namespace hearthfront::storage {
namespace {

std::string reason(int error) {
  return std::generic_category().message(error);
}

std::string holder(int descriptor) {
  std::array<char, 24> text{};
  const ssize_t length = ::pread(descriptor, text.data(), text.size() - 1, 0);
  std::string digits;
  for (ssize_t i = 0;
       i < length && text[static_cast<std::size_t>(i)] >= '0' && text[static_cast<std::size_t>(i)] <= '9';
       ++i) {
    digits += text[static_cast<std::size_t>(i)];
  }
  return digits.empty() ? "another process" : "process " + digits;
}

}  // namespace

std::string canonical_path(const std::string& path) {
  if (path.empty()) throw StorageError(StorageFault::misuse, "No database path is given; name a file.");
  std::error_code error;
  const auto full = std::filesystem::weakly_canonical(std::filesystem::absolute(path, error), error);
  if (error) {
    throw StorageError(StorageFault::io, "Cannot resolve the database path " + path + ": " + error.message() +
                                             ". Check that its folder exists and may be entered.");
  }
  return full.string();
}

FileLock::FileLock(const std::string& database_path) {
  const std::string path = database_path + ".lock";
  descriptor_ = ::open(path.c_str(), O_RDWR | O_CREAT | O_CLOEXEC, 0640);
  if (descriptor_ < 0) {
    const int error = errno;
    throw StorageError(StorageFault::io, "Cannot open the lock file " + path + ": " + reason(error) +
                                             ". Create its folder and let this user write there.");
  }
  if (::flock(descriptor_, LOCK_EX | LOCK_NB) != 0) {
    const int error = errno;
    const std::string who = holder(descriptor_);
    ::close(descriptor_);
    if (error == EWOULDBLOCK) {
      throw StorageError(StorageFault::locked, "The database " + database_path + " is already in use by " +
                                                   who +
                                                   ". Stop that one first, or give this one another file.");
    }
    throw StorageError(StorageFault::io, "Cannot lock " + path + ": " + reason(error) +
                                             ". Keep the database on a local file system.");
  }
  // Only for the message above; a lock that carries no number still locks.
  const std::string number = std::to_string(::getpid()) + "\n";
  if (::ftruncate(descriptor_, 0) == 0) {
    [[maybe_unused]] const ssize_t written = ::pwrite(descriptor_, number.data(), number.size(), 0);
  }
}

FileLock::~FileLock() {
  ::close(descriptor_);
}

FileGuard::FileGuard(std::string database_path) : path_(std::move(database_path)), wal_path_(path_ + "-wal") {
  check();
}

void FileGuard::check() {
  check_one(path_, database_, false);
  // SQLite makes the write-ahead file at the first access and keeps it while anyone is connected.
  check_one(wal_path_, wal_, !wal_.known);
}

void FileGuard::check_one(const std::string& path, Identity& identity, bool may_be_absent) const {
  struct stat status {};
  if (::stat(path.c_str(), &status) != 0) {
    const int error = errno;
    if (error == ENOENT && may_be_absent) return;
    throw StorageError(StorageFault::io, "The database file " + path + " is gone while in use (" +
                                             reason(error) +
                                             "). Put it back or restore a backup, then restart.");
  }
  if (!identity.known) {
    identity = {.device = status.st_dev, .inode = status.st_ino, .known = true};
  } else if (identity.device != status.st_dev || identity.inode != status.st_ino) {
    throw StorageError(StorageFault::io, "The database file " + path +
                                             " was replaced by another file while in use. "
                                             "Restart to work with the new one.");
  }
}

std::int64_t FileGuard::wal_bytes() const {
  struct stat status {};
  return ::stat(wal_path_.c_str(), &status) == 0 ? static_cast<std::int64_t>(status.st_size) : 0;
}

}  // namespace hearthfront::storage
