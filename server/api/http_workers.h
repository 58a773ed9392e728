// A fixed set of threads that run jobs in order of arrival. The queue needs no bound of its own: each open
// connection has at most one job. A job must not throw.
#pragma once

#include <condition_variable>
#include <deque>
#include <functional>
#include <mutex>
#include <thread>
#include <vector>

namespace hearthfront::server {

class WorkerPool {
 public:
  ~WorkerPool() { stop(); }

  void start(int threads);
  void post(std::function<void()> job);  // dropped after stop()
  // Lets running jobs end, forgets waiting ones, joins. Not from a worker.
  void stop();

 private:
  void run();

  std::mutex mutex_;
  std::condition_variable wake_;
  std::deque<std::function<void()>> jobs_;
  bool stopping_ = false;
  std::vector<std::thread> threads_;
};

}  // namespace hearthfront::server
