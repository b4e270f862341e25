#include "run/workers.h"

#include <fcntl.h>
#include <poll.h>
#include <sys/prctl.h>
#include <sys/resource.h>
#include <sys/socket.h>
#include <sys/wait.h>
#include <unistd.h>

#include <algorithm>
#include <cerrno>
#include <chrono>
#include <csignal>
#include <cstring>
#include <fstream>
#include <new>
#include <sstream>
#include <thread>

#include "run/progress.h"

namespace dextral::run {

namespace {

using Clock = std::chrono::steady_clock;

constexpr int kOutOfMemory = 77;  // exit status of a worker that got no more memory
constexpr int kPollMilliseconds = 100;
constexpr std::size_t kNobody = std::size_t(-1);
constexpr rlim_t kStack = rlim_t(64) << 20;
constexpr std::size_t kMegabyte = std::size_t(1) << 20;
constexpr std::size_t kUsualMegabytes = 1024;  // what a worker needs, for the default number of workers

Facts not_read(const project::Unit& unit, std::string why) {
  Facts facts;
  facts.unit = unit.file;
  facts.not_read_because = std::move(why);
  return facts;
}

// Pages of a process by /proc: 0 the whole address space, 1 in memory.
std::size_t pages(pid_t process, int which) {
  std::ifstream statm("/proc/" + std::to_string(process) + "/statm");
  std::size_t total = 0, resident = 0;
  statm >> total >> resident;
  return (which == 0 ? total : resident) * std::size_t(sysconf(_SC_PAGESIZE));
}

bool send_all(int socket, const char* bytes, std::size_t size) {
  while (size > 0) {
    ssize_t sent = send(socket, bytes, size, MSG_NOSIGNAL);
    if (sent < 0 && errno == EINTR) continue;
    if (sent <= 0) return false;
    bytes += sent;
    size -= std::size_t(sent);
  }
  return true;
}

bool receive_all(int socket, char* bytes, std::size_t size) {
  while (size > 0) {
    ssize_t received = recv(socket, bytes, size, 0);
    if (received < 0 && errno == EINTR) continue;
    if (received <= 0) return false;
    bytes += received;
    size -= std::size_t(received);
  }
  return true;
}

// The address space is limited above what stands there already; the parent
// watches the resident memory, which this limit only backs.
void limit_memory(std::size_t megabytes) {
  const rlim_t most = pages(getpid(), 0) + megabytes * kMegabyte + megabytes * kMegabyte / 2 + 512 * kMegabyte;
  rlimit limit{};
  getrlimit(RLIMIT_AS, &limit);
  limit.rlim_cur = std::min(most, limit.rlim_max);
  setrlimit(RLIMIT_AS, &limit);
  std::set_new_handler([] { _exit(kOutOfMemory); });
}

// A crashing parser writes its own stack to standard error: the report says it
// in one line instead. No core file either.
void be_quiet() {
  int nowhere = open("/dev/null", O_RDWR | O_CLOEXEC);
  dup2(nowhere, STDIN_FILENO);
  dup2(nowhere, STDOUT_FILENO);
  dup2(nowhere, STDERR_FILENO);
  rlimit none{0, 0};
  setrlimit(RLIMIT_CORE, &none);
}

[[noreturn]] void work(int socket, const std::vector<project::Unit>& units, const ReadUnit& read,
                       const Limits& limits) {
  prctl(PR_SET_PDEATHSIG, SIGKILL);
  be_quiet();
  raise_stack();
  limit_memory(limits.megabytes);
  std::uint64_t index = 0;
  while (receive_all(socket, reinterpret_cast<char*>(&index), sizeof index)) {
    const std::string bytes = encode(read(units[index]));
    const std::uint64_t size = bytes.size();
    if (!send_all(socket, reinterpret_cast<const char*>(&size), sizeof size)) break;
    if (!send_all(socket, bytes.data(), bytes.size())) break;
  }
  _exit(0);
}

std::string amount(double seconds) {
  std::ostringstream words;
  words << seconds;
  return words.str();
}

std::string why_ended(int status, const Limits& limits) {
  if (WIFEXITED(status) && WEXITSTATUS(status) == kOutOfMemory)
    return "it needs more than " + std::to_string(limits.megabytes) + " MB; --memory-limit raises the limit";
  if (WIFSIGNALED(status)) return "Clang crashed (signal " + std::to_string(WTERMSIG(status)) + ")";
  return "Clang gave up (exit status " + std::to_string(WEXITSTATUS(status)) + ")";
}

// The parent's side of one worker.
struct Worker {
  pid_t process = -1;
  int socket = -1;
  std::size_t unit = kNobody;
  Clock::time_point started;
  std::string received;
};

class Pool {
 public:
  Pool(const std::vector<project::Unit>& units, const ReadUnit& read, const Limits& limits)
      : units_(units), read_(read), limits_(limits), results_(units.size()), progress_(limits.progress, units.size()) {}
  ~Pool() {
    for (Worker& worker : workers_) end(worker);
  }
  Pool(const Pool&) = delete;
  Pool& operator=(const Pool&) = delete;

  std::vector<Facts> run() {
    const std::size_t wanted = limits_.workers ? limits_.workers : default_workers();
    workers_.resize(std::min(wanted, units_.size()));
    for (Worker& worker : workers_) hand_out(worker);
    while (done_ < units_.size()) {
      wait();
      for (Worker& worker : workers_)
        if (worker.unit != kNobody) watch(worker);
    }
    return std::move(results_);
  }

 private:
  bool start(Worker& worker) {
    int ends[2];
    if (socketpair(AF_UNIX, SOCK_STREAM | SOCK_CLOEXEC, 0, ends) != 0) return false;
    pid_t process = fork();
    if (process == 0) {
      close(ends[0]);
      for (const Worker& other : workers_)
        if (other.socket >= 0) close(other.socket);
      work(ends[1], units_, read_, limits_);
    }
    close(ends[1]);
    if (process < 0) {
      close(ends[0]);
      return false;
    }
    worker.process = process;
    worker.socket = ends[0];
    return true;
  }

  int end(Worker& worker) {
    int status = 0;
    if (worker.socket >= 0) close(worker.socket);
    if (worker.process > 0) {
      if (worker.unit != kNobody) kill(worker.process, SIGKILL);
      while (waitpid(worker.process, &status, 0) < 0 && errno == EINTR) {
      }
    }
    worker = Worker{};
    return status;
  }

  // Where no process can be started, the workers that run take the rest; a unit
  // is given up only when there is none.
  void hand_out(Worker& worker) {
    while (next_ < units_.size()) {
      if (give(worker, next_)) {
        ++next_;
        return;
      }
      end(worker);
      if (std::any_of(workers_.begin(), workers_.end(), [](const Worker& w) { return w.unit != kNobody; })) return;
      finish(next_, not_read(units_[next_], "no process could be started for it"));
      ++next_;
    }
  }

  bool give(Worker& worker, std::size_t index) {
    const std::uint64_t message = index;
    if (worker.process <= 0 && !start(worker)) return false;
    if (!send_all(worker.socket, reinterpret_cast<const char*>(&message), sizeof message)) return false;
    worker.unit = index;
    worker.started = Clock::now();
    return true;
  }

  void finish(std::size_t index, Facts facts) {
    results_[index] = std::move(facts);
    ++done_;
    progress_.show(done_, units_[index].file);
  }

  void wait() {
    std::vector<pollfd> sockets;
    for (const Worker& worker : workers_)
      if (worker.unit != kNobody) sockets.push_back({worker.socket, POLLIN, 0});
    poll(sockets.data(), sockets.size(), kPollMilliseconds);
  }

  void watch(Worker& worker) {
    const bool open = receive(worker);
    if (complete(worker)) return take(worker);
    if (!open) return bury(worker, "");
    const std::chrono::duration<double> spent = Clock::now() - worker.started;
    if (spent.count() > limits_.seconds)
      return bury(worker, "it took longer than " + amount(limits_.seconds) + " s; --time-limit raises the limit");
    if (pages(worker.process, 1) > limits_.megabytes * kMegabyte) bury(worker, why_ended(kOutOfMemory << 8, limits_));
  }

  // Takes what has come; false at the end of the stream.
  static bool receive(Worker& worker) {
    char bytes[1 << 16];
    while (true) {
      ssize_t received = recv(worker.socket, bytes, sizeof bytes, MSG_DONTWAIT);
      if (received > 0) {
        worker.received.append(bytes, std::size_t(received));
        continue;
      }
      if (received < 0 && errno == EINTR) continue;
      return received < 0 && (errno == EAGAIN || errno == EWOULDBLOCK);
    }
  }

  static bool complete(const Worker& worker) {
    std::uint64_t size = 0;
    if (worker.received.size() < sizeof size) return false;
    std::memcpy(&size, worker.received.data(), sizeof size);
    return worker.received.size() - sizeof size >= size;
  }

  void take(Worker& worker) {
    const std::size_t index = worker.unit;
    std::optional<Facts> facts = decode(worker.received.substr(sizeof(std::uint64_t)));
    worker.received.clear();
    worker.unit = kNobody;
    finish(index, facts ? std::move(*facts) : not_read(units_[index], "the answer of its worker came damaged"));
    // Memory that the parser keeps is not held against the next unit.
    if (pages(worker.process, 1) > limits_.megabytes * kMegabyte / 2) end(worker);
    hand_out(worker);
  }

  void bury(Worker& worker, const std::string& why) {
    const std::size_t index = worker.unit;
    if (why.empty()) worker.unit = kNobody;  // it died by itself: its own status tells
    const int status = end(worker);
    finish(index, not_read(units_[index], why.empty() ? why_ended(status, limits_) : why));
    hand_out(worker);
  }

  const std::vector<project::Unit>& units_;
  const ReadUnit& read_;
  const Limits& limits_;
  std::vector<Facts> results_;
  std::vector<Worker> workers_;
  std::size_t next_ = 0;
  std::size_t done_ = 0;
  Progress progress_;
};

std::size_t read_number(const std::string& file) {
  std::ifstream stream(file);
  std::size_t number = 0;
  return stream >> number ? number : 0;
}

std::size_t free_megabytes() {
  std::ifstream meminfo("/proc/meminfo");
  std::string word;
  std::size_t kilobytes = 0;
  while (meminfo >> word && word != "MemAvailable:") {
  }
  meminfo >> kilobytes;
  const std::size_t free = kilobytes / 1024;
  // A container may have less.
  const std::size_t most = read_number("/sys/fs/cgroup/memory.max");
  const std::size_t used = read_number("/sys/fs/cgroup/memory.current");
  return most > used ? std::min(free, (most - used) / kMegabyte) : free;
}

}  // namespace

std::vector<Facts> read_all(const std::vector<project::Unit>& units, const ReadUnit& read, const Limits& limits) {
  if (!limits.in_process) return Pool(units, read, limits).run();
  std::vector<Facts> results;
  for (const project::Unit& unit : units) results.push_back(read(unit));
  return results;
}

std::size_t default_workers() {
  const std::size_t cores = std::max(1u, std::thread::hardware_concurrency());
  return std::clamp<std::size_t>(free_megabytes() / kUsualMegabytes, 1, cores);
}

void raise_stack() {
  rlimit limit{};
  if (getrlimit(RLIMIT_STACK, &limit) != 0 || limit.rlim_cur >= kStack) return;
  limit.rlim_cur = limit.rlim_max == RLIM_INFINITY ? kStack : std::min(kStack, limit.rlim_max);
  setrlimit(RLIMIT_STACK, &limit);
}

}  // namespace dextral::run
