// The one thread that writes. Callers queue jobs and wait; the thread takes what is waiting, does it in one
// transaction, commits with one sync and wakes them (group commit without linger: the sync that runs is the
// time in which the next group gathers). It also makes all checkpoints.
//
// Threads: run, close, counters, take_changes from any thread. Owner: Store. Failure: a job that does not fit
// fails alone (misuse); a failed transaction fails every job in it, none is half done; after a failed sync
// the writer refuses everything (unknown_fate).
#pragma once

#include <condition_variable>
#include <cstdint>
#include <deque>
#include <functional>
#include <map>
#include <memory>
#include <mutex>
#include <optional>
#include <string>
#include <thread>
#include <vector>

#include "storage/connection.h"
#include "storage/files.h"
#include "storage/readings.h"
#include "storage/store.h"

namespace hearthfront::storage {

struct Tables {
  Connection& connection;
  ReadingTable& readings;
};

class Writer {
 public:
  using Work = std::function<void(Tables&)>;
  enum class Kind {
    certain,  // checked before it was queued: it fails only with the whole group
    fallible  // may meet a rule of the tables: runs in a savepoint
  };

  // `last_words` runs in the last transaction of a clean close.
  Writer(std::unique_ptr<Connection> connection, std::size_t queue_readings, Work last_words);
  ~Writer();
  Writer(const Writer&) = delete;
  Writer& operator=(const Writer&) = delete;

  // Returns when `work` is committed and synced; else throws StorageError. `readings` counts against the
  // queue's bound. What `work` refers to may live on the caller's stack.
  void run(std::size_t readings, Kind kind, const Work& work);
  void on_change(std::function<void()> wake);
  std::vector<ChangedSpan> take_changes();
  StoreCounters counters() const;
  void close();

 private:
  struct Failure {
    StorageFault fault;
    std::string text;
  };
  struct Job {
    std::size_t readings;
    Kind kind;
    const Work* work;
    // Guarded by mutex_ once queued. A text instead of an exception: each caller throws its own.
    bool done = false;
    std::optional<Failure> failure;
    std::condition_variable woken;
  };
  using Group = std::vector<Job*>;

  void thread_main();
  void commit_group(Group& group);
  std::optional<Failure> transaction(Group& group);
  void run_job(Job& job);
  std::optional<Failure> roll_back(Failure cause);
  void checkpoint_if_due(bool changed);
  void finish();
  Group take_group();
  void take_waiting(Group& group);
  void answer(Group& group, const std::optional<Failure>& failure);
  // With mutex_ held.
  void refuse_if_unfit(std::size_t readings) const;
  void refuse_on_writer_thread() const;
  void poison(Failure cause);

  // Constant after construction.
  const std::size_t queue_readings_;
  const Work last_words_;

  // Only the writer thread, once it runs.
  std::unique_ptr<Connection> connection_;
  FileGuard files_;
  ReadingTable reading_table_;
  Tables tables_;
  int next_checkpoint_pages_;
  int pages_before_ = 0;

  mutable std::mutex mutex_;  // guards what follows
  std::condition_variable work_waits_;
  std::deque<Job*> queue_;
  bool closing_ = false;
  std::optional<Failure> poison_;
  StoreCounters counters_;
  std::map<std::int64_t, ChangedSpan> changes_;
  std::function<void()> wake_;

  std::thread::id writer_id_;

  std::once_flag joined_;
  std::thread thread_;  // last: everything above exists before it starts
};

}  // namespace hearthfront::storage
