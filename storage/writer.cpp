#include "storage/writer.h"

#include <SQLiteCpp/Exception.h>
#include <sqlite3.h>

#include <algorithm>
#include <exception>
#include <utility>

namespace hearthfront::storage {
namespace {

// A transaction of this size commits below about 25 ms on a plain SSD, so nobody waits long behind it.
constexpr std::size_t group_readings = 8'000;
// SQLite's own default (4 MB): larger only makes the recovery after a crash longer.
constexpr int checkpoint_pages = 1'000;
// Readers that always overlap keep the write-ahead file from starting over; from 64 MB on, wait for a gap.
constexpr int too_many_pages = 16'000;
constexpr int gap_wait_ms = 200;
constexpr int close_wait_ms = 1'000;  // then the write-ahead file stays, and the next start reads it

}  // namespace

Writer::Writer(std::unique_ptr<Connection> connection, std::size_t queue_readings, Work last_words)
    : queue_readings_(queue_readings),
      last_words_(std::move(last_words)),
      connection_(std::move(connection)),
      files_(connection_->path()),
      reading_table_(*connection_),
      tables_{*connection_, reading_table_},
      next_checkpoint_pages_(checkpoint_pages),
      thread_([this] { thread_main(); }) {}

Writer::~Writer() {
  close();
}

void Writer::refuse_on_writer_thread() const {
  if (std::this_thread::get_id() != writer_id_) return;
  throw StorageError(StorageFault::misuse,
                     "A change call-back must not write to the store or close it: it would "
                     "wait for itself. Hand the work to another thread.");
}

void Writer::poison(Failure cause) {
  poison_ = std::move(cause);
  counters_.poisoned = true;
}

void Writer::refuse_if_unfit(std::size_t readings) const {
  if (poison_) throw StorageError(poison_->fault, poison_->text);
  if (closing_) {
    throw StorageError(StorageFault::closing,
                       "The store is closing and takes nothing more. Send again when it is back.");
  }
  if (readings > queue_readings_) {
    throw StorageError(StorageFault::misuse,
                       "A batch of " + std::to_string(readings) + " readings is larger than the queue of " +
                           std::to_string(queue_readings_) + ". Send it in smaller parts.");
  }
  if (readings > 0 && counters_.queued_readings + readings > queue_readings_) {
    throw StorageError(StorageFault::busy,
                       std::to_string(counters_.queued_readings) +
                           " readings wait to be stored already. Nothing of this batch was "
                           "taken; send it again in a moment.");
  }
}

void Writer::run(std::size_t readings, Kind kind, const Work& work) {
  Job job{.readings = readings, .kind = kind, .work = &work, .failure = {}, .woken = {}};
  std::unique_lock lock(mutex_);
  refuse_on_writer_thread();
  refuse_if_unfit(readings);
  queue_.push_back(&job);
  counters_.queued_readings += readings;
  counters_.queued_jobs = queue_.size();
  work_waits_.notify_one();
  job.woken.wait(lock, [&] { return job.done; });
  if (job.failure) throw StorageError(job.failure->fault, job.failure->text);
}

void Writer::on_change(std::function<void()> wake) {
  const std::lock_guard lock(mutex_);
  wake_ = std::move(wake);
}

std::vector<ChangedSpan> Writer::take_changes() {
  std::map<std::int64_t, ChangedSpan> taken;
  {
    const std::lock_guard lock(mutex_);
    taken.swap(changes_);
  }
  std::vector<ChangedSpan> spans;
  spans.reserve(taken.size());
  for (const auto& [channel, span] : taken) spans.push_back(span);
  return spans;
}

StoreCounters Writer::counters() const {
  const std::lock_guard lock(mutex_);
  return counters_;
}

void Writer::close() {
  {
    const std::lock_guard lock(mutex_);
    refuse_on_writer_thread();
    closing_ = true;
    work_waits_.notify_one();
  }
  // A second caller waits here until the first is through.
  std::call_once(joined_, [this] { thread_.join(); });
}

Writer::Group Writer::take_group() {
  std::unique_lock lock(mutex_);
  work_waits_.wait(lock, [this] { return closing_ || !queue_.empty(); });
  Group group;
  take_waiting(group);
  return group;
}

// Under mutex_: moves waiting jobs into the group as far as it may grow; the first one always.
void Writer::take_waiting(Group& group) {
  std::size_t readings = 0;
  for (const Job* job : group) readings += job->readings;
  while (!queue_.empty() && (group.empty() || readings + queue_.front()->readings <= group_readings)) {
    readings += queue_.front()->readings;
    counters_.queued_readings -= queue_.front()->readings;
    group.push_back(queue_.front());
    queue_.pop_front();
  }
  counters_.queued_jobs = queue_.size();
}

void Writer::thread_main() {
  {
    const std::lock_guard lock(mutex_);
    writer_id_ = std::this_thread::get_id();
  }
  // An empty group means: closing, and everything that was queued is done.
  for (Group group = take_group(); !group.empty(); group = take_group()) commit_group(group);
  finish();
}

void Writer::commit_group(Group& group) {
  std::optional<Failure> failure;
  {
    const std::lock_guard lock(mutex_);
    failure = poison_;
  }
  if (!failure) failure = transaction(group);
  std::function<void()> wake;
  {
    const std::lock_guard lock(mutex_);
    if (failure) {
      if (failure->fault == StorageFault::unknown_fate) poison(*failure);
    } else {
      const ReadingEffects effects = reading_table_.committed();
      ++counters_.commits;
      counters_.readings_stored += effects.stored;
      counters_.readings_duplicate += effects.duplicate;
      counters_.readings_conflict += effects.conflict;
      for (const auto& [channel, span] : effects.changes) widen(changes_, span);
      if (!effects.changes.empty()) wake = wake_;
    }
    answer(group, failure);
  }
  if (wake) wake();
  // After the answers: what is committed is safe in the write-ahead file, nobody need wait for this.
  checkpoint_if_due(!failure);
}

void Writer::answer(Group& group, const std::optional<Failure>& failure) {
  for (Job* job : group) {
    if (failure) job->failure = failure;
    job->done = true;
    // Under the mutex: the job is gone as soon as its caller can run.
    job->woken.notify_one();
  }
}

std::optional<Writer::Failure> Writer::transaction(Group& group) {
  try {
    files_.check();
    connection_->run("BEGIN IMMEDIATE");
    for (std::size_t i = 0; i < group.size(); ++i) {
      run_job(*group[i]);
      if (i + 1 < group.size()) continue;
      // What came while these rows were written shares their sync; nothing is waited for.
      const std::lock_guard lock(mutex_);
      take_waiting(group);
    }
    reading_table_.finish();
    connection_->reset_statements();
    connection_->run("COMMIT");
    return std::nullopt;
  } catch (const SQLite::Exception& error) {
    const StorageError explained = explain(error, connection_->path(), "store a group of changes");
    return roll_back({explained.fault, explained.what()});
  } catch (const StorageError& error) {
    return roll_back({error.fault, error.what()});
  } catch (const std::exception& error) {
    return roll_back({StorageFault::io, "Cannot store a group of changes: " + std::string(error.what()) +
                                            ". Nothing of it was stored; send it again."});
  }
}

void Writer::run_job(Job& job) {
  if (job.kind == Kind::certain) {
    (*job.work)(tables_);
    return;
  }
  connection_->run("SAVEPOINT job");
  std::optional<Failure> failure;
  try {
    (*job.work)(tables_);
  } catch (const SQLite::Exception& error) {
    const StorageError explained = explain(error, connection_->path(), "store this change");
    // Anything but a broken rule concerns the disk, hence the whole group.
    if (explained.fault != StorageFault::misuse || !connection_->in_transaction()) throw;
    failure = {explained.fault, explained.what()};
  } catch (const StorageError& error) {
    failure = {error.fault, error.what()};
  }
  if (failure) {
    connection_->reset_statements();
    connection_->run("ROLLBACK TO job");
    // Its caller waits under mutex_ and reads this only after `done`, which answer() sets under it too.
    job.failure = failure;
  }
  connection_->run("RELEASE job");
}

// SQLite has rolled back by itself after some failures, not after others.
std::optional<Writer::Failure> Writer::roll_back(Failure cause) {
  reading_table_.rolled_back();
  connection_->reset_statements();
  if (!connection_->in_transaction()) return cause;
  try {
    connection_->run("ROLLBACK");
  } catch (const SQLite::Exception& error) {
    return Failure{StorageFault::unknown_fate,
                   cause.text + " Taking it back failed as well (" + error.what() +
                       "), so what the file holds is unknown. Check the disk and restart."};
  }
  return cause;
}

void Writer::checkpoint_if_due(bool changed) {
  CheckpointOutcome outcome;
  const int pages = connection_->wal_pages();
  if (pages < pages_before_) next_checkpoint_pages_ = checkpoint_pages;  // the file started over
  pages_before_ = pages;
  if (changed && pages >= next_checkpoint_pages_) {
    const bool too_many = pages >= too_many_pages;
    outcome =
        connection_->checkpoint(too_many ? CheckpointMode::truncate : CheckpointMode::passive, gap_wait_ms);
    next_checkpoint_pages_ = pages + checkpoint_pages;
  }
  const std::int64_t bytes = files_.wal_bytes();
  using enum CheckpointOutcome::Kind;
  const std::lock_guard lock(mutex_);
  counters_.wal_bytes = bytes;
  if (outcome.kind == failed || outcome.kind == sync_failed) ++counters_.checkpoint_failures;
  if (outcome.kind == sync_failed) {
    poison({StorageFault::unknown_fate,
            "The disk did not confirm the copying of " + connection_->path() +
                "-wal into the database. What was acknowledged is in that file; nothing more is taken. "
                "Check the disk and restart."});
  }
}

void Writer::finish() {
  bool poisoned = false;
  {
    const std::lock_guard lock(mutex_);
    poisoned = poison_.has_value();
  }
  bool sound = false;
  if (!poisoned) {
    Job farewell{.readings = 0, .kind = Kind::certain, .work = &last_words_, .failure = {}, .woken = {}};
    Group last{&farewell};
    sound = !transaction(last) && connection_->checkpoint(CheckpointMode::truncate, close_wait_ms).kind !=
                                      CheckpointOutcome::Kind::sync_failed;
  }
  // After a failed sync another checkpoint would seem to succeed and then drop the write-ahead file, the
  // only sure copy.
  if (!sound) connection_->keep_wal_at_close();
  connection_.reset();
  const std::lock_guard lock(mutex_);
  counters_.wal_bytes = files_.wal_bytes();
}

}  // namespace hearthfront::storage
