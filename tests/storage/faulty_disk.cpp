#include "storage/faulty_disk.h"

#include <sqlite3.h>

#include <cstring>
#include <filesystem>
#include <mutex>

namespace hearthfront::storage::test {
namespace {

struct State {
  std::mutex mutex;
  std::string folder, synced_folder, suffix;
  DiskFault fault = DiskFault::write_error;
  int until_fault = 0;  // 0 = not armed
  bool struck = false;
  long syncs = 0;
};
State state;
sqlite3_vfs* real_vfs = nullptr;
sqlite3_vfs faulty_vfs;

// SQLite allocates szOsFile bytes: this, then the real file right behind it.
struct File {
  sqlite3_file base;
  const char* path;  // SQLite keeps the name while the file is open
};
File* ours(sqlite3_file* file) {
  return reinterpret_cast<File*>(file);
}
sqlite3_file* real(sqlite3_file* file) {
  return reinterpret_cast<sqlite3_file*>(ours(file) + 1);
}

bool watched(const std::string& path) {
  return !state.folder.empty() && path.rfind(state.folder + "/", 0) == 0;
}

bool strikes(sqlite3_file* file, bool sync) {
  const std::lock_guard lock(state.mutex);
  const std::string path = ours(file)->path == nullptr ? "" : ours(file)->path;
  if (state.until_fault == 0 || sync != (state.fault == DiskFault::sync_error) || !watched(path))
    return false;
  if (!std::string_view(path).ends_with(state.suffix)) return false;
  state.struck = --state.until_fault == 0;
  return state.struck;
}

int write_code() {
  const std::lock_guard lock(state.mutex);
  return state.fault == DiskFault::no_space ? SQLITE_FULL : SQLITE_IOERR_WRITE;
}

int close_file(sqlite3_file* f) {
  return real(f)->pMethods->xClose(real(f));
}
int read_file(sqlite3_file* f, void* to, int bytes, sqlite3_int64 at) {
  return real(f)->pMethods->xRead(real(f), to, bytes, at);
}
int write_file(sqlite3_file* f, const void* from, int bytes, sqlite3_int64 at) {
  if (strikes(f, false)) return write_code();
  return real(f)->pMethods->xWrite(real(f), from, bytes, at);
}
int truncate_file(sqlite3_file* f, sqlite3_int64 bytes) {
  if (strikes(f, false)) return SQLITE_IOERR_TRUNCATE;
  return real(f)->pMethods->xTruncate(real(f), bytes);
}
int sync_file(sqlite3_file* f, int flags) {
  if (strikes(f, true)) return SQLITE_IOERR_FSYNC;
  const int code = real(f)->pMethods->xSync(real(f), flags);
  const std::lock_guard lock(state.mutex);
  if (code != SQLITE_OK || ours(f)->path == nullptr || !watched(ours(f)->path)) return code;
  ++state.syncs;
  if (!state.synced_folder.empty()) {
    const std::filesystem::path from(ours(f)->path);
    std::filesystem::copy_file(from, state.synced_folder / from.filename(),
                               std::filesystem::copy_options::overwrite_existing);
  }
  return code;
}
int file_size(sqlite3_file* f, sqlite3_int64* bytes) {
  return real(f)->pMethods->xFileSize(real(f), bytes);
}
int lock_file(sqlite3_file* f, int level) {
  return real(f)->pMethods->xLock(real(f), level);
}
int unlock_file(sqlite3_file* f, int level) {
  return real(f)->pMethods->xUnlock(real(f), level);
}
int check_lock(sqlite3_file* f, int* held) {
  return real(f)->pMethods->xCheckReservedLock(real(f), held);
}
int control(sqlite3_file* f, int what, void* with) {
  return real(f)->pMethods->xFileControl(real(f), what, with);
}
int sector(sqlite3_file* f) {
  return real(f)->pMethods->xSectorSize(real(f));
}
int traits(sqlite3_file* f) {
  return real(f)->pMethods->xDeviceCharacteristics(real(f));
}
int shm_map(sqlite3_file* f, int region, int bytes, int extend, void volatile** to) {
  return real(f)->pMethods->xShmMap(real(f), region, bytes, extend, to);
}
int shm_lock(sqlite3_file* f, int offset, int count, int flags) {
  return real(f)->pMethods->xShmLock(real(f), offset, count, flags);
}
void shm_barrier(sqlite3_file* f) {
  real(f)->pMethods->xShmBarrier(real(f));
}
int shm_unmap(sqlite3_file* f, int remove) {
  return real(f)->pMethods->xShmUnmap(real(f), remove);
}

const sqlite3_io_methods methods{2,           close_file, read_file, write_file,  truncate_file,
                                 sync_file,   file_size,  lock_file, unlock_file, check_lock,
                                 control,     sector,     traits,    shm_map,     shm_lock,
                                 shm_barrier, shm_unmap,  nullptr,   nullptr};

int open_file(sqlite3_vfs*, const char* path, sqlite3_file* file, int flags, int* out_flags) {
  ours(file)->path = path;
  ours(file)->base.pMethods = nullptr;
  const int code = real_vfs->xOpen(real_vfs, path, real(file), flags, out_flags);
  // As SQLite asks: methods are set where the real file has some, so that it is closed also after a failure.
  if (real(file)->pMethods != nullptr) ours(file)->base.pMethods = &methods;
  return code;
}

int delete_file(sqlite3_vfs*, const char* path, int sync_folder) {
  const int code = real_vfs->xDelete(real_vfs, path, sync_folder);
  const std::lock_guard lock(state.mutex);
  if (code == SQLITE_OK && watched(path) && !state.synced_folder.empty()) {
    std::filesystem::remove(state.synced_folder / std::filesystem::path(path).filename());
  }
  return code;
}

}  // namespace

FaultyDisk::FaultyDisk(std::string folder, std::string synced_folder) {
  {
    const std::lock_guard lock(state.mutex);
    state.folder = std::move(folder);
    state.synced_folder = std::move(synced_folder);
    state.until_fault = 0;
    state.struck = false;
    state.syncs = 0;
  }
  if (real_vfs == nullptr) {
    real_vfs = sqlite3_vfs_find(nullptr);
    faulty_vfs = *real_vfs;
    faulty_vfs.zName = "faulty-disk";
    faulty_vfs.pNext = nullptr;
    faulty_vfs.szOsFile = static_cast<int>(sizeof(File)) + real_vfs->szOsFile;
    faulty_vfs.xOpen = open_file;
    faulty_vfs.xDelete = delete_file;
  }
  sqlite3_vfs_register(&faulty_vfs, 1);
}

FaultyDisk::~FaultyDisk() {
  sqlite3_vfs_register(real_vfs, 1);
  const std::lock_guard lock(state.mutex);
  state.folder.clear();
  state.synced_folder.clear();
}

void FaultyDisk::arm(DiskFault fault, int nth, std::string suffix) {
  const std::lock_guard lock(state.mutex);
  state.fault = fault;
  state.until_fault = nth;
  state.suffix = std::move(suffix);
  state.struck = false;
}

void FaultyDisk::disarm() {
  const std::lock_guard lock(state.mutex);
  state.until_fault = 0;
}

bool FaultyDisk::struck() const {
  const std::lock_guard lock(state.mutex);
  return state.struck;
}

long FaultyDisk::syncs() const {
  const std::lock_guard lock(state.mutex);
  return state.syncs;
}

}  // namespace hearthfront::storage::test
